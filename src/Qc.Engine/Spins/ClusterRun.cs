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
        var amplitudes = new double[_sites];
        foreach (Candidate c in candidates)
        {
            SpinBlock block = blocks[c.Block];
            int site = DominantSite(block, levels, c, amplitudes);
            if (site < 0)
            {
                continue;
            }

            double frequency = levels[c.Block].Energies[c.Upper] - levels[c.Block + 1].Energies[c.Lower];
            Span<double> row = lines.Add(new Transition(frequency, c.Intensity, site));
            if (slopes is not null)
            {
                ReadOnlySpan<double> upper = slopes[c.Block].AsSpan(c.Upper * slopeLength, slopeLength);
                ReadOnlySpan<double> lower = slopes[c.Block + 1].AsSpan(c.Lower * slopeLength, slopeLength);
                for (int p = 0; p < slopeLength; p++)
                {
                    row[p] = upper[p] - lower[p];
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
            var lowered = new double[m];
            for (int i = 0; i < n; i++)
            {
                Array.Clear(lowered);
                ReadOnlySpan<double> upper = levels[b].Vectors.AsSpan(i * n, n);
                foreach (SpinBlock.Lowering step in blocks[b].Lowerings)
                {
                    lowered[step.To] += step.Value * upper[step.From];
                }

                for (int f = 0; f < m; f++)
                {
                    double amplitude = VectorMath.Dot(levels[b + 1].Vectors.AsSpan(f * m, m), lowered);
                    double intensity = weight * amplitude * amplitude;
                    total += intensity;
                    if (intensity > floor)
                    {
                        candidates.Add(new Candidate(b, i, f, intensity));
                    }
                }
            }
        }

        return candidates;
    }

    /// <summary>Leaves out the weakest lines: each below the limit of one line, all below the limit of all.</summary>
    private void DropWeakest(List<Candidate> candidates, double total)
    {
        candidates.Sort((a, b) => b.Intensity.CompareTo(a.Intensity));
        double kept = 0;
        int count = 0;
        while (count < candidates.Count
            && (candidates[count].Intensity >= options.DroppedLine * spins || total - kept > options.DroppedInAll * total))
        {
            kept += candidates[count++].Intensity;
        }

        candidates.RemoveRange(count, candidates.Count - count);
    }

    /// <summary>
    /// The site with the largest squared amplitude ⟨f|I⁻ of the site|i⟩², the first of equals;
    /// −1 if the core has no more than half of the squares.
    /// </summary>
    private int DominantSite(SpinBlock block, Level[] levels, Candidate c, double[] amplitudes)
    {
        int m = levels[c.Block + 1].Energies.Length;
        ReadOnlySpan<double> upper = levels[c.Block].Vectors.AsSpan(c.Upper * block.Dimension, block.Dimension);
        ReadOnlySpan<double> lower = levels[c.Block + 1].Vectors.AsSpan(c.Lower * m, m);
        Array.Clear(amplitudes);
        foreach (SpinBlock.Lowering step in block.Lowerings)
        {
            amplitudes[step.Site] += step.Value * upper[step.From] * lower[step.To];
        }

        double sum = 0;
        double coreSum = 0;
        double best = 0;
        int site = -1;
        for (int i = 0; i < _sites; i++)
        {
            double square = amplitudes[i] * amplitudes[i];
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
        for (int state = 0; state < n; state++)
        {
            ReadOnlySpan<double> v = level.Vectors.AsSpan(state * n, n);
            Span<double> slope = slopes.AsSpan(state * length, length);
            for (int i = 0; i < _sites; i++)
            {
                ReadOnlySpan<double> m = block.M.AsSpan(i * n, n);
                for (int b = 0; b < n; b++)
                {
                    slope[i] += v[b] * v[b] * m[b];
                }
            }

            for (int p = 0; p < pairs.Length; p++)
            {
                ReadOnlySpan<double> mA = block.M.AsSpan(pairs[p].A * n, n);
                ReadOnlySpan<double> mB = block.M.AsSpan(pairs[p].B * n, n);
                for (int b = 0; b < n; b++)
                {
                    slope[_sites + p] += v[b] * v[b] * mA[b] * mB[b];
                }
            }

            foreach (SpinBlock.FlipFlop flip in block.FlipFlops)
            {
                slope[_sites + flip.Pair] += 2 * flip.Value * v[flip.From] * v[flip.To];
            }
        }

        return slopes;
    }
}
