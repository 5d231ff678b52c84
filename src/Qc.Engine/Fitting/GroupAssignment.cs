using System.Collections.Immutable;
using Qc.Engine.Processing;

namespace Qc.Engine.Fitting;

/// <summary>What the assignment needs to know of an expected group.</summary>
/// <param name="Group">Index of the proton group.</param>
/// <param name="Count">Number of protons.</param>
/// <param name="ShiftPpm">Expected shift.</param>
/// <param name="StandardUncertaintyPpm">Its standard uncertainty.</param>
/// <param name="RmsHertz">Expected root mean square width of the multiplet, √(¼ Σ n J²) in the weak limit.</param>
internal sealed record AssignableGroup(int Group, int Count, double ShiftPpm, double StandardUncertaintyPpm, double RmsHertz);

/// <summary>What the assignment needs to know of a signal.</summary>
/// <param name="Signal">The signal.</param>
/// <param name="ForeignArea">Area in it already claimed by solvent, water or reference.</param>
/// <param name="ForeignUncertainty">Standard uncertainty of that area.</param>
/// <param name="UnassignedCost">Most that it costs to give it to no group; small where an exchangeable proton, water or a standard may own it.</param>
internal sealed record AssignableSignal(MeasuredSignal Signal, double ForeignArea, double ForeignUncertainty, double UnassignedCost)
{
    /// <summary>Area left for the product.</summary>
    public double Area => Math.Max(0, Signal.Area - ForeignArea);
}

/// <summary>A way to place the expected groups on the measured signals.</summary>
/// <param name="SignalOf">Signal index by position in the list of groups; -1: the group is absent.</param>
/// <param name="AreaPerProton">Area of one proton.</param>
/// <param name="Cost">Half a sum of squares of standardised deviations; smaller is better.</param>
internal sealed record Assignment(ImmutableArray<int> SignalOf, double AreaPerProton, double Cost);

/// <summary>
/// Places groups on signals by minimum cost: deviations of shift, of area (several groups may share a signal) and of
/// width, each in standard uncertainties and capped, since one gross deviation must not hide the rest. Searched by a
/// beam over the groups from low to high field, for each of several areas per proton that the signals themselves suggest.
/// </summary>
internal static class GroupAssignment
{
    private const int BeamWidth = 250;
    private const double AbsentCost = 30;
    private const double LargestShiftCost = 40;
    private const double LargestAreaCost = 25;
    private const double LargestWidthCost = 5;

    /// <summary>Most that a signal without an owner costs.</summary>
    internal const double LargestUnassignedCost = 18;

    /// <summary>What it costs where something else surely owns it.</summary>
    internal const double OwnedElsewhereCost = 0.5;

    /// <summary>The best assignments, best first, at most <paramref name="wanted"/>, all different.</summary>
    public static ImmutableArray<Assignment> Best(
        IReadOnlyList<AssignableGroup> groups, IReadOnlyList<AssignableSignal> signals, int wanted)
    {
        if (groups.Count == 0)
        {
            return [];
        }

        var best = new Dictionary<string, Assignment>();
        foreach (double areaPerProton in Scales(groups, signals))
        {
            foreach (Assignment assignment in Search(groups, signals, areaPerProton, wanted, BeamWidth))
            {
                string key = string.Join(',', assignment.SignalOf);
                if (!best.TryGetValue(key, out Assignment? known) || assignment.Cost < known.Cost)
                {
                    best[key] = assignment;
                }
            }
        }

        return [.. best.OrderBy(pair => pair.Value.Cost).ThenBy(pair => pair.Key, StringComparer.Ordinal).Take(wanted).Select(pair => pair.Value)];
    }

    /// <summary>The best assignment at a known area per proton, with a narrow beam: quick, for comparing many structures.</summary>
    public static Assignment? BestAt(
        IReadOnlyList<AssignableGroup> groups, IReadOnlyList<AssignableSignal> signals, double areaPerProton, int beamWidth) =>
        groups.Count == 0 || areaPerProton <= 0 ? null : Search(groups, signals, areaPerProton, 1, beamWidth).First();

    private static IEnumerable<double> Scales(IReadOnlyList<AssignableGroup> groups, IReadOnlyList<AssignableSignal> signals)
    {
        double protons = groups.Sum(g => g.Count);
        double total = signals.Sum(s => s.Area);
        var scales = new SortedSet<double>();
        if (total <= 0)
        {
            yield break;
        }

        scales.Add(total / protons);
        scales.Add(0.8 * total / protons);
        int[] counts = [.. groups.Select(g => g.Count).Distinct().Order()];
        foreach (AssignableSignal signal in signals.OrderByDescending(s => s.Area).Take(12))
        {
            foreach (int count in counts)
            {
                double scale = signal.Area / count;
                if (scale > 0.02 * total / protons && scale < 1.6 * total / protons)
                {
                    scales.Add(scale);
                }
            }
        }

        double previous = 0;
        foreach (double scale in scales)
        {
            if (scale > 1.04 * previous)
            {
                previous = scale;
                yield return scale;
            }
        }
    }

    private sealed record Partial(ImmutableArray<int> SignalOf, double Cost, double[] Protons);

    private static IEnumerable<Assignment> Search(
        IReadOnlyList<AssignableGroup> groups, IReadOnlyList<AssignableSignal> signals, double areaPerProton, int wanted, int beamWidth)
    {
        int[] order = [.. Enumerable.Range(0, groups.Count).OrderByDescending(i => groups[i].ShiftPpm).ThenBy(i => i)];
        var beam = new List<Partial> { new([], 0, new double[signals.Count]) };
        foreach (int g in order)
        {
            AssignableGroup group = groups[g];
            var next = new List<Partial>(beam.Count * 4);
            foreach (Partial partial in beam)
            {
                next.Add(partial with { SignalOf = partial.SignalOf.Add(-1), Cost = partial.Cost + AbsentCost });
                for (int s = 0; s < signals.Count; s++)
                {
                    double shiftCost = ShiftCost(group, signals[s], alone: partial.Protons[s] == 0);
                    if (shiftCost >= AbsentCost)
                    {
                        continue;
                    }

                    var protons = (double[])partial.Protons.Clone();
                    double before = OverfullCost(protons[s], signals[s], areaPerProton);
                    protons[s] += group.Count;
                    double after = OverfullCost(protons[s], signals[s], areaPerProton);
                    next.Add(new Partial(partial.SignalOf.Add(s), partial.Cost + shiftCost + after - before, protons));
                }
            }

            beam = [.. next.OrderBy(p => p.Cost).Take(beamWidth)];
        }

        var finished = new List<Assignment>();
        foreach (Partial partial in beam)
        {
            double cost = partial.Cost;
            for (int s = 0; s < signals.Count; s++)
            {
                cost += AreaCost(partial.Protons[s], signals[s], areaPerProton) - OverfullCost(partial.Protons[s], signals[s], areaPerProton);
            }

            var signalOf = new int[groups.Count];
            for (int i = 0; i < order.Length; i++)
            {
                signalOf[order[i]] = partial.SignalOf[i];
            }

            cost += WidthCost(groups, signals, signalOf);
            finished.Add(new Assignment([.. signalOf], areaPerProton, cost));
        }

        return finished.OrderBy(a => a.Cost).Take(wanted);
    }

    /// <summary>
    /// A group alone in a signal of its own size lies at the centre of gravity; in a wider one, which others will share,
    /// anywhere within.
    /// </summary>
    private static double ShiftCost(AssignableGroup group, AssignableSignal signal, bool alone)
    {
        bool fits = alone && signal.Signal.SpanHertz <= (5 * group.RmsHertz) + 8;
        double place = fits
            ? signal.Signal.CentroidPpm
            : Math.Clamp(group.ShiftPpm, signal.Signal.Ppm.Low, signal.Signal.Ppm.High);
        double z = (group.ShiftPpm - place) / Math.Max(0.04, group.StandardUncertaintyPpm);
        return Math.Min(LargestShiftCost, 0.5 * z * z);
    }

    private static double AreaDeviation(double protons, AssignableSignal signal, double areaPerProton)
    {
        double found = signal.Area / areaPerProton;
        double relative = 0.12 * Math.Max(protons, 0.5);
        double foreign = signal.ForeignUncertainty / areaPerProton;
        return (found - protons) / Math.Sqrt(0.01 + (relative * relative) + (foreign * foreign));
    }

    private static double OverfullCost(double protons, AssignableSignal signal, double areaPerProton)
    {
        double z = Math.Min(0, AreaDeviation(protons, signal, areaPerProton));
        return protons == 0 ? 0 : Math.Min(LargestAreaCost, 0.5 * z * z);
    }

    private static double AreaCost(double protons, AssignableSignal signal, double areaPerProton)
    {
        if (protons == 0)
        {
            double left = signal.Area / areaPerProton / 0.25;
            return Math.Min(signal.UnassignedCost, 0.5 * left * left);
        }

        double z = AreaDeviation(protons, signal, areaPerProton);
        return Math.Min(LargestAreaCost, 0.5 * z * z);
    }

    private static double WidthCost(IReadOnlyList<AssignableGroup> groups, IReadOnlyList<AssignableSignal> signals, int[] signalOf)
    {
        double cost = 0;
        for (int s = 0; s < signals.Count; s++)
        {
            int occupants = 0;
            int last = -1;
            for (int g = 0; g < signalOf.Length; g++)
            {
                if (signalOf[g] == s)
                {
                    occupants++;
                    last = g;
                }
            }

            if (occupants == 1)
            {
                double expected = groups[last].RmsHertz;
                double z = (signals[s].Signal.RmsHertz - expected) / (1.0 + (0.25 * expected));
                cost += Math.Min(LargestWidthCost, 0.5 * z * z);
            }
        }

        return cost;
    }
}
