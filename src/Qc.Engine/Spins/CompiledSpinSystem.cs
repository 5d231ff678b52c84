namespace Qc.Engine.Spins;

/// <summary>
/// What does not change while the frequencies and couplings of a spin system are fitted: its clusters, their states and
/// the operators between them. Compile once, evaluate often; evaluation keeps no state and may run on several threads.
/// </summary>
public sealed class CompiledSpinSystem
{
    private readonly SimulationOptions _options;
    private readonly SpinCluster[] _clusters;

    private CompiledSpinSystem(SpinSystem system, SimulationOptions options)
    {
        ClusterPlan plan = ClusterPlan.Of(system, options);
        _options = options;
        _clusters = [.. plan.Clusters];
        SplitErrorHertz = plan.SplitErrorHertz;
        SiteCount = system.Sites.Length;
        CouplingCount = system.Couplings.Length;
    }

    /// <summary>Number of sites: the length of the frequencies to evaluate.</summary>
    public int SiteCount { get; }

    /// <summary>Number of couplings listed when compiled: the length of the couplings to evaluate.</summary>
    public int CouplingCount { get; }

    /// <summary>
    /// Estimate of the largest error of a line position, in Hz, made by splitting clusters that are too large, at the
    /// values given to <see cref="Compile"/>; 0 if all is exact.
    /// </summary>
    public double SplitErrorHertz { get; }

    /// <summary>Prepares a system.</summary>
    /// <param name="system">
    /// Its counts and listed couplings fix the structure: a listed coupling joins its sites even while its value is zero.
    /// Frequencies and couplings only decide where a cluster that is too large is split.
    /// A coupling of a site with itself does not show in a spectrum and is ignored.
    /// </param>
    /// <param name="options">Limits; the defaults if null.</param>
    /// <exception cref="ArgumentException">A count below 1, a site that is not there, a value that is not finite.</exception>
    public static CompiledSpinSystem Compile(SpinSystem system, SimulationOptions? options = null)
    {
        ArgumentNullException.ThrowIfNull(system);
        foreach (SpinSite site in system.Sites)
        {
            if (site.Count < 1 || !double.IsFinite(site.FrequencyHertz))
            {
                throw new ArgumentException("A site needs at least one spin and a finite frequency.", nameof(system));
            }
        }

        foreach (SpinCoupling c in system.Couplings)
        {
            if (c.SiteA < 0 || c.SiteA >= system.Sites.Length || c.SiteB < 0 || c.SiteB >= system.Sites.Length
                || !double.IsFinite(c.Hertz))
            {
                throw new ArgumentException("A coupling needs two sites of the system and a finite value.", nameof(system));
            }
        }

        return new CompiledSpinSystem(system, options ?? SimulationOptions.Default);
    }

    /// <summary>The lines at the given frequencies and couplings, ordered by frequency.</summary>
    /// <param name="frequenciesHertz">One per site, in the order of the system.</param>
    /// <param name="couplingsHertz">One per coupling, in the order of the system.</param>
    public Transition[] Evaluate(ReadOnlySpan<double> frequenciesHertz, ReadOnlySpan<double> couplingsHertz) =>
        Run(frequenciesHertz, couplingsHertz, false).Lines;

    /// <summary>The lines and how their frequencies change with every parameter.</summary>
    /// <param name="frequenciesHertz">One per site, in the order of the system.</param>
    /// <param name="couplingsHertz">One per coupling, in the order of the system.</param>
    public LineGradients EvaluateWithGradient(
        ReadOnlySpan<double> frequenciesHertz, ReadOnlySpan<double> couplingsHertz) =>
        Run(frequenciesHertz, couplingsHertz, true);

    private LineGradients Run(ReadOnlySpan<double> frequencies, ReadOnlySpan<double> couplings, bool derivatives)
    {
        ArgumentOutOfRangeException.ThrowIfNotEqual(frequencies.Length, SiteCount);
        ArgumentOutOfRangeException.ThrowIfNotEqual(couplings.Length, CouplingCount);
        var evaluated = new LineBuffer[_clusters.Length];
        var origin = new List<(int Cluster, int Place)>();
        for (int c = 0; c < _clusters.Length; c++)
        {
            evaluated[c] = EvaluateOnce(c, frequencies, couplings, evaluated, derivatives);
            for (int i = 0; i < evaluated[c].Count; i++)
            {
                origin.Add((c, i));
            }
        }

        var order = new int[origin.Count];
        var keys = new double[origin.Count];
        for (int i = 0; i < order.Length; i++)
        {
            order[i] = i;
            keys[i] = evaluated[origin[i].Cluster][origin[i].Place].FrequencyHertz;
        }

        Array.Sort(keys, order);
        var lines = new Transition[order.Length];
        for (int i = 0; i < order.Length; i++)
        {
            (int c, int place) = origin[order[i]];
            Transition line = evaluated[c][place];
            lines[i] = line with { Site = _clusters[c].Sites[line.Site] };
        }

        if (!derivatives)
        {
            return new LineGradients(lines, 0, 0, [], []);
        }

        var bySite = new double[lines.Length * SiteCount];
        var byCoupling = new double[lines.Length * CouplingCount];
        for (int line = 0; line < lines.Length; line++)
        {
            (int c, int place) = origin[order[line]];
            ReadOnlySpan<double> row = evaluated[c].Row(place);
            SpinCluster cluster = _clusters[c];
            for (int i = 0; i < cluster.Sites.Length; i++)
            {
                bySite[line * SiteCount + cluster.Sites[i]] = row[i];
            }

            for (int k = 0; k < cluster.RowCouplings.Length; k++)
            {
                byCoupling[line * CouplingCount + cluster.RowCouplings[k]] += row[cluster.Sites.Length + k];
            }
        }

        return new LineGradients(lines, SiteCount, CouplingCount, bySite, byCoupling);
    }

    /// <summary>A cluster that equals an earlier one in structure and values has the same lines.</summary>
    private LineBuffer EvaluateOnce(
        int c, ReadOnlySpan<double> frequencies, ReadOnlySpan<double> couplings, LineBuffer[] evaluated, bool derivatives)
    {
        for (int earlier = 0; earlier < c; earlier++)
        {
            if (_clusters[c].Equals(_clusters[earlier], frequencies, couplings))
            {
                return evaluated[earlier];
            }
        }

        return _clusters[c].Evaluate(frequencies, couplings, _options, derivatives);
    }
}
