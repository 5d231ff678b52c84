using System.Collections.Immutable;
using Qc.Engine.Fitting;
using Qc.Engine.Prediction;
using Qc.Engine.Processing;
using Qc.Engine.Structures;
using Qc.Engine.Values;

namespace Qc.Engine.Rivals;

/// <summary>The multiplets that a fit found, as signals that other structures can be laid on.</summary>
internal static class FittedMultiplets
{
    /// <summary>Multiplets nearer than this are one signal: which of them a group of another structure takes is open.</summary>
    private const double OneSignalPpm = 0.03;

    private const double LargestPatternMisfit = 0.15;
    private const double LargestLeftOverProtons = 0.25;

    /// <summary>
    /// The multiplets, or null where they do not describe the spectrum: a group was not found, a pattern does not fit, or more
    /// signal is left over than an exchangeable proton's foot.
    /// </summary>
    public static AssignableSignal[]? Of(FitInput input, FitResult fit)
    {
        ProtonGroup[] lasting = [.. input.Product.Protons.Groups.Where(g => g.Lability == Lability.Fixed)];
        if (fit.AreaPerProton <= 0
            || lasting.Any(g => !fit.Groups[g.Index].Found || fit.Groups[g.Index].PatternMisfit > LargestPatternMisfit)
            || fit.LeftOver.Any(l => l.Area > LargestLeftOverProtons * fit.AreaPerProton))
        {
            return null;
        }

        Dictionary<int, double> found = fit.Couplings.ToDictionary(c => c.Parameter, c => c.Hertz);
        Expectation fitted = input.Product with
        {
            Couplings = [.. input.Product.Couplings.Select(c => c with { Hertz = found.GetValueOrDefault(c.Parameter, c.Hertz) })],
        };
        List<List<ProtonGroup>> clusters = [];
        foreach (ProtonGroup group in lasting.OrderBy(g => fit.Groups[g.Index].ShiftPpm))
        {
            List<ProtonGroup>? home = clusters.Find(cluster => cluster.Exists(other => AreOne(fit, group, other)));
            if (home is null)
            {
                clusters.Add([group]);
            }
            else
            {
                home.Add(group);
            }
        }

        return [.. clusters.Select(cluster => Signal(fit, fitted, cluster, input.Spectrum.FrequencyMHz))];
    }

    private static bool AreOne(FitResult fit, ProtonGroup group, ProtonGroup other) =>
        group.DiastereotopicPartner == other.Index
        || Math.Abs(fit.Groups[group.Index].ShiftPpm - fit.Groups[other.Index].ShiftPpm) < OneSignalPpm;

    private static AssignableSignal Signal(FitResult fit, Expectation fitted, List<ProtonGroup> cluster, double frequencyMHz)
    {
        double protons = cluster.Sum(g => fit.Groups[g.Index].Protons);
        double centroid = cluster.Sum(g => fit.Groups[g.Index].Protons * fit.Groups[g.Index].ShiftPpm) / protons;
        var region = new Interval(cluster.Min(g => fit.Groups[g.Index].RegionPpm.Low), cluster.Max(g => fit.Groups[g.Index].RegionPpm.High));
        double rms = Math.Sqrt(cluster.Average(g => Math.Pow(StartingPlaces.RmsHertz(fitted, g.Index), 2)));

        // The outermost lines; a region reaches three widths beyond them.
        double high = Math.Max(centroid * frequencyMHz, (region.High * frequencyMHz) - (3 * fit.WidthHertz));
        double low = Math.Min(centroid * frequencyMHz, (region.Low * frequencyMHz) + (3 * fit.WidthHertz));
        ImmutableArray<Maximum> ends = [new Maximum(high, 1, 1, fit.WidthHertz), new Maximum(low, 1, 1, fit.WidthHertz)];
        return new AssignableSignal(
            new MeasuredSignal(region, protons * fit.AreaPerProton, centroid, rms, ends), 0, 0, GroupAssignment.LargestUnassignedCost);
    }
}
