namespace Qc.Engine.Spins;

/// <summary>Diagonalises the blocks of one set of particles and adds its lines.</summary>
/// <param name="core">Sites whose lines are wanted.</param>
/// <param name="pairs">Coupled sites.</param>
/// <param name="options">What may be left out.</param>
/// <param name="spins">Number of spins-½ in the cluster.</param>
internal sealed class ClusterRun(bool[] core, ClusterPair[] pairs, SimulationOptions options, int spins)
{
    private readonly int _sites = core.Length;

    private sealed record Level(double[] Energies, double[] Vectors);

    private readonly record struct Candidate(int Block, int Upper, int Lower, double Intensity);

    /// <summary>Adds the lines of one set of particles, each intensity multiplied by <paramref name="weight"/>.</summary>
    public void Add(
        SpinBlock[] blocks, double weight, ReadOnlySpan<double> frequencies, ReadOnlySpan<double> couplings, LineBuffer lines)
    {
        var levels = new Level[blocks.Length];
        for (int b = 0; b < blocks.Length; b++)
        {
            (double[] energies, double[] vectors) =
                SymmetricEigen.Solve(Hamiltonian(blocks[b], frequencies, couplings), blocks[b].Dimension);
            levels[b] = new Level(energies, vectors);
        }

        List<Candidate> candidates = Candidates(blocks, levels, weight, out double total);
        DropWeakest(candidates, total);

        double[][]? slopes = lines.RowLength > 0 ? [.. blocks.Select((block, b) => Slopes(block, levels[b]))] : null;
        int slopeLength = _sites + pairs.Length;
        for (int start = 0; start < candidates.Count;)
        {
            (int b, int upper) = (candidates[start].Block, candidates[start].Upper);
            double[] lowered = LoweredBySite(blocks[b], blocks[b + 1].Dimension, levels[b], upper);
            for (; start < candidates.Count && candidates[start].Block == b && candidates[start].Upper == upper; start++)
            {
                int lower = candidates[start].Lower;
                int site = DominantSite(lowered, levels[b + 1], lower);
                if (site < 0)
                {
                    continue;
                }

                double frequency = levels[b].Energies[upper] - levels[b + 1].Energies[lower];
                Span<double> row = lines.Add(new Transition(frequency, candidates[start].Intensity, site));
                if (slopes is not null)
                {
                    ReadOnlySpan<double> above = slopes[b].AsSpan(upper * slopeLength, slopeLength);
                    ReadOnlySpan<double> below = slopes[b + 1].AsSpan(lower * slopeLength, slopeLength);
                    for (int p = 0; p < slopeLength; p++)
                    {
                        row[p] = above[p] - below[p];
                    }
                }
            }
        }
    }

    private double[] Hamiltonian(SpinBlock block, ReadOnlySpan<double> frequencies, ReadOnlySpan<double> couplings)
    {
        int n = block.Dimension;
        var h = new double[n * n];
        for (int state = 0; state < n; state++)
        {
            double energy = 0;
            for (int i = 0; i < _sites; i++)
            {
                energy += frequencies[i] * block.M[i * n + state];
            }

            foreach (ClusterPair pair in pairs)
            {
                energy += couplings[pair.Coupling] * block.M[pair.A * n + state] * block.M[pair.B * n + state];
            }

            h[state * n + state] = energy;
        }

        foreach (SpinBlock.FlipFlop flip in block.FlipFlops)
        {
            double value = couplings[pairs[flip.Pair].Coupling] * flip.Value;
            h[flip.From * n + flip.To] += value;
            h[flip.To * n + flip.From] += value;
        }

        return h;
    }

    /// <summary>Every transition worth a look, by block, upper and lower state, and the intensity of all.</summary>
    private List<Candidate> Candidates(SpinBlock[] blocks, Level[] levels, double weight, out double total)
    {
        var candidates = new List<Candidate>();
        // Far below what could ever be kept; spares storing millions of forbidden transitions.
        double floor = 1e-4 * options.DroppedLine * spins;
        total = 0;
        for (int b = 0; b + 1 < blocks.Length; b++)
        {
            int n = blocks[b].Dimension;
            int m = blocks[b + 1].Dimension;
            var lowered = new double[4 * m];
            var intensities = new double[4 * m];
            for (int first = 0; first < n; first += 4)
            {
                int together = Math.Min(4, n - first);
                Array.Clear(lowered);
                for (int i = 0; i < together; i++)
                {
                    Span<double> target = lowered.AsSpan(i * m, m);
                    ReadOnlySpan<double> upper = levels[b].Vectors.AsSpan((first + i) * n, n);
                    foreach (SpinBlock.Lowering step in blocks[b].Lowerings)
                    {
                        target[step.To] += step.Value * upper[step.From];
                    }
                }

                for (int f = 0; f < m; f++)
                {
                    (double a0, double a1, double a2, double a3) = VectorMath.Dot4(
                        levels[b + 1].Vectors.AsSpan(f * m, m),
                        lowered.AsSpan(0, m), lowered.AsSpan(m, m), lowered.AsSpan(2 * m, m), lowered.AsSpan(3 * m, m));
                    intensities[f] = weight * a0 * a0;
                    intensities[m + f] = weight * a1 * a1;
                    intensities[2 * m + f] = weight * a2 * a2;
                    intensities[3 * m + f] = weight * a3 * a3;
                }

                for (int k = 0; k < together * m; k++)
                {
                    total += intensities[k];
                    if (intensities[k] > floor)
                    {
                        candidates.Add(new Candidate(b, first + k / m, k % m, intensities[k]));
                    }
                }
            }
        }

        return candidates;
    }

    /// <summary>
    /// Leaves out the lines below the limit of one line; if together they would exceed the limit of all, the limit is
    /// halved until they do not.
    /// </summary>
    private void DropWeakest(List<Candidate> candidates, double total)
    {
        double limit = options.DroppedLine * spins;
        while (limit > double.Epsilon && total - KeptAbove(candidates, limit) > options.DroppedInAll * total)
        {
            limit /= 2;
        }

        candidates.RemoveAll(c => c.Intensity < limit);
    }

    private static double KeptAbove(List<Candidate> candidates, double limit)
    {
        double kept = 0;
        foreach (Candidate c in candidates)
        {
            kept += c.Intensity >= limit ? c.Intensity : 0;
        }

        return kept;
    }

    /// <summary>I⁻ of each site applied to one state: <c>[site * m …]</c>.</summary>
    private double[] LoweredBySite(SpinBlock block, int m, Level level, int upper)
    {
        var lowered = new double[_sites * m];
        ReadOnlySpan<double> vector = level.Vectors.AsSpan(upper * block.Dimension, block.Dimension);
        foreach (SpinBlock.Lowering step in block.Lowerings)
        {
            lowered[step.Site * m + step.To] += step.Value * vector[step.From];
        }

        return lowered;
    }

    /// <summary>
    /// The site with the largest squared amplitude ⟨f|I⁻ of the site|i⟩², the first of equals;
    /// −1 if the core has no more than half of the squares: then the line belongs to another core.
    /// </summary>
    private int DominantSite(double[] lowered, Level level, int lower)
    {
        int m = level.Energies.Length;
        ReadOnlySpan<double> vector = level.Vectors.AsSpan(lower * m, m);
        double sum = 0;
        double coreSum = 0;
        double best = 0;
        int site = -1;
        for (int i = 0; i < _sites; i++)
        {
            double amplitude = VectorMath.Dot(vector, lowered.AsSpan(i * m, m));
            double square = amplitude * amplitude;
            sum += square;
            if (core[i])
            {
                coreSum += square;
                if (square > best * (1 + 1e-9))
                {
                    best = square;
                    site = i;
                }
            }
        }

        return coreSum > 0.5 * sum ? site : -1;
    }

    /// <summary>
    /// dE/dν of each site and dE/dJ of each pair, for each state of a block: the expectation value of the operator that the
    /// parameter multiplies (H. Hellmann 1937; R. P. Feynman, Phys. Rev. 1939, 56, 340).
    /// </summary>
    private double[] Slopes(SpinBlock block, Level level)
    {
        int n = block.Dimension;
        int length = _sites + pairs.Length;
        var slopes = new double[n * length];
        var squares = new double[n];
        var products = new double[pairs.Length * n];
        for (int p = 0; p < pairs.Length; p++)
        {
            for (int b = 0; b < n; b++)
            {
                products[p * n + b] = block.M[pairs[p].A * n + b] * block.M[pairs[p].B * n + b];
            }
        }

        for (int state = 0; state < n; state++)
        {
            ReadOnlySpan<double> v = level.Vectors.AsSpan(state * n, n);
            Span<double> slope = slopes.AsSpan(state * length, length);
            for (int b = 0; b < n; b++)
            {
                squares[b] = v[b] * v[b];
            }

            for (int i = 0; i < _sites; i++)
            {
                slope[i] = VectorMath.Dot(squares, block.M.AsSpan(i * n, n));
            }

            for (int p = 0; p < pairs.Length; p++)
            {
                slope[_sites + p] = VectorMath.Dot(squares, products.AsSpan(p * n, n));
            }

            foreach (SpinBlock.FlipFlop flip in block.FlipFlops)
            {
                slope[_sites + flip.Pair] += 2 * flip.Value * v[flip.From] * v[flip.To];
            }
        }

        return slopes;
    }
}
