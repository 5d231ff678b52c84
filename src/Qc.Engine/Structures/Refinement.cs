namespace Qc.Engine.Structures;

/// <summary>Colour refinement of two graphs together, so that equal colours mean the same on both.</summary>
internal static class Refinement
{
    /// <summary>
    /// Refines until nothing changes. False as soon as the two differ in how many nodes bear a colour: no isomorphism then.
    /// </summary>
    public static bool Run(SymmetrySearch.Side first, SymmetrySearch.Side second, int[] a, int[] b)
    {
        int count = first.Nodes.Length;
        var entries = new (int[] Signature, int Node)[2 * count];
        int classes = 0;
        while (true)
        {
            for (int i = 0; i < count; i++)
            {
                entries[i] = (first.Signature(first.Nodes[i], a), i);
                entries[count + i] = (second.Signature(second.Nodes[i], b), count + i);
            }

            Array.Sort(entries, static (x, y) => x.Signature.AsSpan().SequenceCompareTo(y.Signature));
            int colour = 0;
            int balance = 0;
            for (int i = 0; i < entries.Length; i++)
            {
                if (i > 0 && !entries[i].Signature.AsSpan().SequenceEqual(entries[i - 1].Signature))
                {
                    if (balance != 0)
                    {
                        return false;
                    }

                    colour++;
                }

                int node = entries[i].Node;
                balance += node < count ? 1 : -1;
                if (node < count)
                {
                    a[first.Nodes[node]] = colour;
                }
                else
                {
                    b[second.Nodes[node - count]] = colour;
                }
            }

            if (balance != 0)
            {
                return false;
            }

            if (colour + 1 == classes)
            {
                return true;
            }

            classes = colour + 1;
        }
    }
}
