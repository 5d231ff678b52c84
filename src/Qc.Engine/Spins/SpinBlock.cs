namespace Qc.Engine.Spins;

/// <summary>
/// The product states of equal total M_z of a set of particles with spins F_i, and the operators between them.
/// A state is a tuple (m_1 … m_n); block b holds the states that lie b steps below the top one.
/// </summary>
internal sealed class SpinBlock
{
    /// <summary>A matrix element that couples two states of this block: J_pair · Value.</summary>
    internal readonly record struct FlipFlop(int Pair, int From, int To, double Value);

    /// <summary>A matrix element of I⁻ of one site from this block into the next.</summary>
    internal readonly record struct Lowering(int Site, int From, int To, double Value);

    private SpinBlock(int dimension, double[] m, FlipFlop[] flipFlops, Lowering[] lowerings)
    {
        Dimension = dimension;
        M = m;
        FlipFlops = flipFlops;
        Lowerings = lowerings;
    }

    /// <summary>Number of states.</summary>
    public int Dimension { get; }

    /// <summary>m of each site in each state: <c>M[site * Dimension + state]</c>.</summary>
    public double[] M { get; }

    /// <summary>Off-diagonal elements of the coupling operators, each pair of states once.</summary>
    public FlipFlop[] FlipFlops { get; }

    /// <summary>Elements of I⁻ into the next block; empty for the last.</summary>
    public Lowering[] Lowerings { get; }

    /// <summary>All blocks of the particles, from the largest M_z to the smallest.</summary>
    /// <param name="twiceF">2F of each site; 0 is allowed and never flips.</param>
    /// <param name="pairs">Coupled sites.</param>
    public static SpinBlock[] Build(ReadOnlySpan<int> twiceF, ReadOnlySpan<(int A, int B)> pairs)
    {
        int sites = twiceF.Length;
        var stride = new int[sites];
        int states = 1;
        for (int i = 0; i < sites; i++)
        {
            stride[i] = states;
            states *= twiceF[i] + 1;
        }

        // steps[code * sites + i]: how far site i is below its top m; position[code]: place of the state in its block.
        var steps = new int[states * sites];
        var position = new int[states];
        var members = new List<int>[twiceF.ToArray().Sum() + 1];
        for (int b = 0; b < members.Length; b++)
        {
            members[b] = [];
        }

        for (int code = 0; code < states; code++)
        {
            int depth = 0;
            for (int i = 0; i < sites; i++)
            {
                int k = code / stride[i] % (twiceF[i] + 1);
                steps[code * sites + i] = k;
                depth += k;
            }

            position[code] = members[depth].Count;
            members[depth].Add(code);
        }

        var blocks = new SpinBlock[members.Length];
        for (int b = 0; b < blocks.Length; b++)
        {
            List<int> codes = members[b];
            var m = new double[sites * codes.Count];
            var flips = new List<FlipFlop>();
            var lowerings = new List<Lowering>();
            for (int state = 0; state < codes.Count; state++)
            {
                int code = codes[state];
                ReadOnlySpan<int> k = steps.AsSpan(code * sites, sites);
                for (int i = 0; i < sites; i++)
                {
                    m[i * codes.Count + state] = 0.5 * twiceF[i] - k[i];
                    if (k[i] < twiceF[i])
                    {
                        lowerings.Add(new Lowering(i, state, position[code + stride[i]], Ladder(twiceF[i], k[i])));
                    }
                }

                for (int p = 0; p < pairs.Length; p++)
                {
                    (int a, int c) = pairs[p];
                    if (k[a] < twiceF[a] && k[c] > 0)
                    {
                        double value = 0.5 * Ladder(twiceF[a], k[a]) * Ladder(twiceF[c], k[c] - 1);
                        flips.Add(new FlipFlop(p, state, position[code + stride[a] - stride[c]], value));
                    }
                }
            }

            blocks[b] = new SpinBlock(codes.Count, m, [.. flips], [.. lowerings]);
        }

        return blocks;
    }

    /// <summary>⟨m−1|I⁻|m⟩ = √(F(F+1) − m(m−1)) for the state k steps below the top: √((2F − k)(k + 1)).</summary>
    private static double Ladder(int twiceF, int k) => Math.Sqrt((double)(twiceF - k) * (k + 1));

    /// <summary>Number of states in the largest block of sites with these counts.</summary>
    public static double LargestDimension(IEnumerable<int> counts)
    {
        double[] byDepth = [1];
        foreach (int count in counts)
        {
            var next = new double[byDepth.Length + count];
            for (int depth = 0; depth < byDepth.Length; depth++)
            {
                for (int k = 0; k <= count; k++)
                {
                    next[depth + k] += byDepth[depth];
                }
            }

            byDepth = next;
        }

        return byDepth.Max();
    }
}
