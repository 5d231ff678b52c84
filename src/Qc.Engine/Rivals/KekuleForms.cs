using Qc.Engine.Structures;

namespace Qc.Engine.Rivals;

/// <summary>
/// Keeps one of the Kekulé forms of each aromatic structure: the one whose canonical form is least. Nothing has to be remembered
/// for that: all forms of a structure are made from any of them, and it stays if none of the others comes before it.
/// </summary>
internal static class KekuleForms
{
    /// <summary>Those that come first among their Kekulé forms; all that have no others.</summary>
    public static IEnumerable<IsomerGraph> OneOfEach(IEnumerable<IsomerGraph> graphs)
    {
        var labelling = new GraphLabelling();
        return graphs.Where(graph => IsFirst(graph, labelling));
    }

    private static bool IsFirst(IsomerGraph graph, GraphLabelling labelling)
    {
        // Aromatic marks without a choice need no look: a ring with two alternating double bonds at least.
        if (graph.RingCount == 0 || graph.Bonds.Count(bond => bond.Order == 2) < 2)
        {
            return true;
        }

        Molecule molecule = graph.ToMolecule();
        int[] aromatic = [.. Enumerable.Range(0, molecule.Bonds.Length).Where(b => molecule.Bonds[b].IsAromatic)];
        if (aromatic.Length == 0)
        {
            return true;
        }

        byte[] orders = [.. graph.Bonds.Select(bond => bond.Order)];
        HashSet<int> waiting = [.. aromatic.Where(b => orders[b] == 2).SelectMany(b => new int[] { graph.Bonds[b].A, graph.Bonds[b].B })];
        foreach (int bond in aromatic)
        {
            orders[bond] = (byte)(orders[bond] == 3 ? 3 : 1);
        }

        int[] own = CodeOf(graph, [.. graph.Bonds.Select(bond => bond.Order)], labelling);
        return Forms(graph, aromatic, orders, waiting).All(form => own.AsSpan().SequenceCompareTo(CodeOf(graph, form, labelling)) <= 0);
    }

    /// <summary>All ways to pair the atoms that wait for a double bond along aromatic bonds.</summary>
    private static IEnumerable<byte[]> Forms(IsomerGraph graph, int[] aromatic, byte[] orders, HashSet<int> waiting)
    {
        if (waiting.Count == 0)
        {
            yield return orders;
            yield break;
        }

        int atom = waiting.Min();
        foreach (int bond in aromatic)
        {
            (int a, int b) = (graph.Bonds[bond].A, graph.Bonds[bond].B);
            if ((a == atom || b == atom) && orders[bond] == 1 && waiting.Contains(a) && waiting.Contains(b))
            {
                byte[] next = [.. orders];
                next[bond] = 2;
                foreach (byte[] form in Forms(graph, aromatic, next, [.. waiting.Where(w => w != a && w != b)]))
                {
                    yield return form;
                }
            }
        }
    }

    private static int[] CodeOf(IsomerGraph graph, byte[] orders, GraphLabelling labelling)
    {
        var copy = new LabelledGraph();
        foreach (byte kind in graph.Kinds)
        {
            copy.AddVertex(kind);
        }

        for (int b = 0; b < orders.Length; b++)
        {
            copy.Join(graph.Bonds[b].A, graph.Bonds[b].B, orders[b]);
        }

        labelling.Label(copy);
        return labelling.Code;
    }
}
