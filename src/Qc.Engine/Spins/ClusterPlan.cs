namespace Qc.Engine.Spins;

/// <summary>
/// Decides what is diagonalised together. Observed sites joined by couplings form a cluster. A cluster that is too large
/// is split: strongly coupled sites stay together as a core; each core is computed within its neighbourhood, the sites
/// that matter most to its lines, and everything farther only splits its lines to first order.
/// </summary>
internal sealed class ClusterPlan
{
    /// <summary>Pairs with |J| / √(Δν² + J²) above this are strongly coupled and share a core where there is room.</summary>
    private const double StronglyCoupled = 0.1;

    /// <summary>Most runs of one cluster through the states of other nuclei; the weakest of more split to first order.</summary>
    private const int MostShiftingRuns = 64;

    /// <summary>Largest block of a core: 20 admits 6 distinct spins and leaves room for a neighbourhood.</summary>
    private const int LargestCoreBlock = 20;

    private readonly SpinSystem _system;
    private readonly SimulationOptions _options;
    private readonly int[] _cluster;

    private ClusterPlan(SpinSystem system, SimulationOptions options)
    {
        _system = system;
        _options = options;
        _cluster = Enumerable.Range(0, system.Sites.Length).ToArray();
        foreach (SpinCoupling c in system.Couplings.Where(IsObservedPair))
        {
            Join(_cluster, c.SiteA, c.SiteB);
        }
    }

    /// <summary>The clusters; every observed site is in the core of exactly one.</summary>
    public List<SpinCluster> Clusters { get; } = [];

    /// <summary>Estimate of the largest error of a line position made by splitting, in Hz; 0 if nothing was split.</summary>
    public double SplitErrorHertz { get; private set; }

    public static ClusterPlan Of(SpinSystem system, SimulationOptions options)
    {
        var plan = new ClusterPlan(system, options);
        foreach (IGrouping<int, int> cluster in Enumerable.Range(0, system.Sites.Length)
            .Where(i => system.Sites[i].Observed).GroupBy(i => plan._cluster[i]))
        {
            int[] sites = [.. cluster];
            if (plan.Block(sites) <= options.LargestExactBlock)
            {
                plan.Add(sites, sites);
            }
            else
            {
                plan.Split(sites);
            }
        }

        return plan;
    }

    private bool IsObservedPair(SpinCoupling c) =>
        c.SiteA != c.SiteB && _system.Sites[c.SiteA].Observed && _system.Sites[c.SiteB].Observed;

    private double Block(IEnumerable<int> sites) => SpinBlock.LargestDimension(sites.Select(i => _system.Sites[i].Count));

    private void Split(int[] sites)
    {
        var members = new HashSet<int>(sites);
        SpinCoupling[] pairs = [.. _system.Couplings.Where(c => IsObservedPair(c) && members.Contains(c.SiteA))];
        int[] core = Enumerable.Range(0, _system.Sites.Length).ToArray();
        foreach (SpinCoupling c in pairs.Where(c => Strength(c) > StronglyCoupled).OrderByDescending(Strength))
        {
            if (core[c.SiteA] != core[c.SiteB]
                && Block(sites.Where(i => core[i] == core[c.SiteA] || core[i] == core[c.SiteB])) <= LargestCoreBlock)
            {
                Join(core, c.SiteA, c.SiteB);
            }
        }

        foreach (IGrouping<int, int> group in sites.GroupBy(i => core[i]))
        {
            int[] wanted = [.. group];
            Add(Neighbourhood(wanted, pairs), wanted);
        }
    }

    /// <summary>
    /// The core and, most important first, the sites that fit. Leaving out a site coupled to the core by J costs its
    /// lines about J·θ/2 (θ = |J|/√(Δν² + J²), the second-order shift); the same with the θ of core sites among
    /// themselves, as their mixing changes with the state of that site. A site coupled to such a neighbour changes the
    /// pattern J by about its own θ with it, and so on along the chain.
    /// </summary>
    private int[] Neighbourhood(int[] core, SpinCoupling[] pairs)
    {
        var chosen = new HashSet<int>(core);
        var refused = new HashSet<int>();
        while (true)
        {
            Dictionary<int, double> importance = Importance(core, chosen, pairs);
            int next = -1;
            foreach ((int site, double hertz) in importance.OrderBy(x => x.Key))
            {
                if (!chosen.Contains(site) && !refused.Contains(site) && (next < 0 || hertz > importance[next]))
                {
                    next = site;
                }
            }

            if (next < 0)
            {
                return [.. chosen.Order()];
            }

            if (Block(chosen.Append(next)) <= _options.LargestNeighbourhoodBlock)
            {
                chosen.Add(next);
            }
            else
            {
                refused.Add(next);
                SplitErrorHertz = Math.Max(SplitErrorHertz, importance[next]);
            }
        }
    }

    private Dictionary<int, double> Importance(int[] core, HashSet<int> chosen, SpinCoupling[] pairs)
    {
        var splits = new Dictionary<int, double>();
        var importance = new Dictionary<int, double>();
        var mixing = new Dictionary<int, double>();
        foreach (SpinCoupling c in pairs.Where(c => core.Contains(c.SiteA) && core.Contains(c.SiteB)))
        {
            mixing[c.SiteA] = Math.Max(mixing.GetValueOrDefault(c.SiteA), Strength(c));
            mixing[c.SiteB] = Math.Max(mixing.GetValueOrDefault(c.SiteB), Strength(c));
        }

        foreach (SpinCoupling c in pairs)
        {
            foreach ((int from, int to) in new[] { (c.SiteA, c.SiteB), (c.SiteB, c.SiteA) })
            {
                if (core.Contains(from) && !core.Contains(to))
                {
                    double j = Math.Abs(c.Hertz) * _system.Sites[to].Count;
                    double theta = Math.Max(Strength(c), mixing.GetValueOrDefault(from));
                    splits[to] = Math.Max(splits.GetValueOrDefault(to), j);
                    importance[to] = Math.Max(importance.GetValueOrDefault(to), 0.5 * j * theta);
                }
            }
        }

        // Chains lose a factor θ < 1 at each step, so as many rounds as there are chosen sites settle every path.
        for (int round = 0; round < chosen.Count; round++)
        {
            foreach (SpinCoupling c in pairs)
            {
                foreach ((int from, int to) in new[] { (c.SiteA, c.SiteB), (c.SiteB, c.SiteA) })
                {
                    if (chosen.Contains(from) && !core.Contains(from) && !core.Contains(to))
                    {
                        double reach = Math.Max(splits.GetValueOrDefault(from), importance.GetValueOrDefault(from));
                        importance[to] = Math.Max(importance.GetValueOrDefault(to), reach * Strength(c));
                    }
                }
            }
        }

        return importance;
    }

    private double Strength(SpinCoupling c)
    {
        double distance = _system.Sites[c.SiteA].FrequencyHertz - _system.Sites[c.SiteB].FrequencyHertz;
        double length = Math.Sqrt(distance * distance + c.Hertz * c.Hertz);
        return length > 0 ? Math.Abs(c.Hertz) / length : 0;
    }

    private void Add(int[] sites, int[] wanted)
    {
        var place = new Dictionary<int, int>();
        for (int i = 0; i < sites.Length; i++)
        {
            place[sites[i]] = i;
        }

        var pairs = new List<ClusterPair>();
        var links = new SortedDictionary<int, List<(int Site, int Coupling)>>();
        for (int k = 0; k < _system.Couplings.Length; k++)
        {
            SpinCoupling c = _system.Couplings[k];
            bool hasA = place.TryGetValue(c.SiteA, out int a);
            bool hasB = place.TryGetValue(c.SiteB, out int b);
            if (c.SiteA == c.SiteB || (!hasA && !hasB))
            {
                continue;
            }

            if (hasA && hasB)
            {
                pairs.Add(new ClusterPair(a, b, k));
            }
            else
            {
                int outside = hasA ? c.SiteB : c.SiteA;
                if (!links.TryGetValue(outside, out List<(int, int)>? list))
                {
                    links[outside] = list = [];
                }

                list.Add((hasA ? a : b, k));
            }
        }

        var shifting = new List<StaticSite>();
        var splitting = new List<StaticSite>();
        int runs = 1;
        foreach ((int site, List<(int Site, int Coupling)> list) in links
            .OrderByDescending(l => l.Value.Max(x => Math.Abs(_system.Couplings[x.Coupling].Hertz))))
        {
            int count = _system.Sites[site].Count;
            bool runThrough = !_system.Sites[site].Observed && runs * (count + 1) <= MostShiftingRuns;
            runs *= runThrough ? count + 1 : 1;
            (runThrough ? shifting : splitting).Add(new StaticSite(count, [.. list]));
        }

        Clusters.Add(new SpinCluster(
            sites,
            [.. sites.Select(i => _system.Sites[i].Count)],
            [.. sites.Select(wanted.Contains)],
            [.. pairs],
            [.. shifting],
            [.. splitting]));
    }

    private static void Join(int[] label, int a, int b)
    {
        int from = Math.Max(label[a], label[b]);
        int to = Math.Min(label[a], label[b]);
        for (int i = 0; i < label.Length; i++)
        {
            label[i] = label[i] == from ? to : label[i];
        }
    }
}
