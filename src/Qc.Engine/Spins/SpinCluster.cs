namespace Qc.Engine.Spins;

/// <summary>A coupling between two observed sites of a cluster, by their place in it.</summary>
internal readonly record struct ClusterPair(int A, int B, int Coupling);

/// <summary>A site outside the Hamiltonian that shifts sites of a cluster by J·m: another nucleus, or a proton cut off.</summary>
internal sealed record StaticSite(int Count, (int Site, int Coupling)[] Links);

/// <summary>
/// Sites whose Hamiltonian is diagonalised together, and the exact transitions of those in its core.
/// H = Σ νᵢ I_z,i + Σ Jᵢⱼ Iᵢ·Iⱼ is real and keeps the total M_z; a line goes from a state i to a state f one step lower,
/// at E_i − E_f with intensity |⟨f|Σ I⁻|i⟩|². Over all 2^N states of N spins these sum to Tr(I⁺I⁻) = N·2^(N−1).
/// </summary>
internal sealed class SpinCluster
{
    private readonly int[] _counts;
    private readonly bool[] _core;
    private readonly int _spins;
    private readonly int _coreSpins;
    private readonly ParticleSet[] _particleSets;

    private sealed record ParticleSet(double Weight, SpinBlock[] Blocks);

    /// <param name="sites">Indices of the sites in the system.</param>
    /// <param name="counts">Spins of each site.</param>
    /// <param name="core">The sites whose lines are wanted.</param>
    /// <param name="pairs">Couplings inside the cluster.</param>
    /// <param name="shifting">Sites whose every state is run through the Hamiltonian.</param>
    /// <param name="splitting">Sites that split the finished lines to first order.</param>
    public SpinCluster(
        int[] sites, int[] counts, bool[] core, ClusterPair[] pairs, StaticSite[] shifting, StaticSite[] splitting)
    {
        Sites = sites;
        Pairs = pairs;
        Shifting = shifting;
        Splitting = splitting;
        _counts = counts;
        _core = core;
        _spins = counts.Sum();
        _coreSpins = counts.Where((_, i) => core[i]).Sum();
        _particleSets = BuildParticleSets(counts, pairs);

        // The row of derivatives: sites, pairs, links of shifting sites, links of splitting sites.
        RowCouplings =
        [
            .. pairs.Select(p => p.Coupling),
            .. shifting.Concat(splitting).SelectMany(s => s.Links).Select(l => l.Coupling),
        ];
    }

    public int[] Sites { get; }

    public ClusterPair[] Pairs { get; }

    public StaticSite[] Shifting { get; }

    public StaticSite[] Splitting { get; }

    /// <summary>Which coupling of the system each derivative after those of the sites belongs to.</summary>
    public int[] RowCouplings { get; }

    private int RowLength => Sites.Length + RowCouplings.Length;

    /// <summary>The lines of the core. Sites of the lines and rows are places in this cluster.</summary>
    public LineBuffer Evaluate(
        ReadOnlySpan<double> frequencies, ReadOnlySpan<double> couplings, SimulationOptions options, bool derivatives)
    {
        bool rows = derivatives || Splitting.Length > 0;
        var lines = new LineBuffer(rows ? RowLength : 0);
        var local = new double[Sites.Length];
        var m = new double[Shifting.Length];
        var run = new ClusterRun(_core, Pairs, options, _spins);
        int combinations = Shifting.Aggregate(1, (product, s) => product * (s.Count + 1));
        for (int code = 0; code < combinations; code++)
        {
            double weight = Math.Pow(2, 1 - _spins);
            int rest = code;
            for (int i = 0; i < local.Length; i++)
            {
                local[i] = frequencies[Sites[i]];
            }

            for (int s = 0; s < Shifting.Length; s++)
            {
                int k = rest % (Shifting[s].Count + 1);
                rest /= Shifting[s].Count + 1;
                m[s] = 0.5 * Shifting[s].Count - k;
                weight *= CompositeSpin.Binomial(Shifting[s].Count, k) * Math.Pow(2, -Shifting[s].Count);
                foreach ((int site, int coupling) in Shifting[s].Links)
                {
                    local[site] += couplings[coupling] * m[s];
                }
            }

            int before = lines.Count;
            foreach (ParticleSet set in _particleSets)
            {
                run.Add(set.Blocks, weight * set.Weight, local, couplings, lines);
            }

            if (rows)
            {
                FillShiftingLinks(lines, before, m);
            }
        }

        lines = lines.Merged(options.MergeHertz);
        if (Splitting.Length > 0)
        {
            lines = FirstOrderSplitting.Apply(
                lines, Splitting, couplings, RowLength - Splitting.Sum(s => s.Links.Length), options);
        }

        lines.Normalise(_coreSpins);
        return lines;
    }

    /// <summary>Whether another cluster has the same structure, and the same values here.</summary>
    public bool Equals(SpinCluster other, ReadOnlySpan<double> frequencies, ReadOnlySpan<double> couplings)
    {
        for (int i = 0; i < Math.Min(Sites.Length, other.Sites.Length); i++)
        {
            if (frequencies[Sites[i]] != frequencies[other.Sites[i]])
            {
                return false;
            }
        }

        if (!_counts.AsSpan().SequenceEqual(other._counts) || !_core.AsSpan().SequenceEqual(other._core)
            || !Structure.SequenceEqual(other.Structure))
        {
            return false;
        }

        for (int k = 0; k < RowCouplings.Length; k++)
        {
            if (couplings[RowCouplings[k]] != couplings[other.RowCouplings[k]])
            {
                return false;
            }
        }

        return true;
    }

    /// <summary>Who couples to whom, by places: pairs, then the sites outside with their counts.</summary>
    private IEnumerable<(int, int)> Structure =>
        Pairs.Select(p => (p.A, p.B))
            .Append((Shifting.Length, Splitting.Length))
            .Concat(Shifting.Concat(Splitting).SelectMany(s => s.Links.Select(l => (s.Count, l.Site)).Append((-1, -1))));

    private void FillShiftingLinks(LineBuffer lines, int first, double[] m)
    {
        for (int line = first; line < lines.Count; line++)
        {
            Span<double> row = lines.WritableRow(line);
            int place = Sites.Length + Pairs.Length;
            for (int s = 0; s < Shifting.Length; s++)
            {
                foreach ((int site, _) in Shifting[s].Links)
                {
                    row[place++] = row[site] * m[s];
                }
            }
        }
    }

    private static ParticleSet[] BuildParticleSets(int[] counts, ClusterPair[] pairs)
    {
        CompositeSpin[][] particles = [.. counts.Select(CompositeSpin.Of)];
        (int, int)[] coupled = [.. pairs.Select(p => (p.A, p.B))];
        int combinations = particles.Aggregate(1, (product, p) => product * p.Length);
        var sets = new ParticleSet[combinations];
        var twiceF = new int[counts.Length];
        for (int code = 0; code < combinations; code++)
        {
            double weight = 1;
            int rest = code;
            for (int i = 0; i < counts.Length; i++)
            {
                CompositeSpin particle = particles[i][rest % particles[i].Length];
                rest /= particles[i].Length;
                twiceF[i] = particle.TwiceF;
                weight *= particle.Multiplicity;
            }

            sets[code] = new ParticleSet(weight, SpinBlock.Build(twiceF, coupled));
        }

        return sets;
    }
}
