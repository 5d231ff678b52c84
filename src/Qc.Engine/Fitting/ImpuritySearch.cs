using System.Collections.Immutable;
using Qc.Engine.Values;

namespace Qc.Engine.Fitting;

/// <summary>Compares what is left over with the table of known impurities.</summary>
internal static class ImpuritySearch
{
    private const double TolerancePpm = 0.025;
    private const int MostAdded = 8;

    /// <summary>
    /// Impurities all of whose signals find left-over signal at their place, most protons explained first; each region is
    /// given to one impurity only. A single-line impurity is taken only where the region shows a single line there.
    /// </summary>
    public static ImmutableArray<KnownSubstance> Find(FitInput input, FitReading reading)
    {
        var free = reading.LeftOver.Where(r => r.Area > 0.003 * reading.AreaPerProton).ToList();
        var inModel = reading.KnownNames.ToHashSet(StringComparer.Ordinal);
        var found = ImmutableArray.CreateBuilder<KnownSubstance>();
        foreach (KnownSubstance impurity in input.Known
            .Where(k => k.Role == "impurity" && !inModel.Contains(k.Name))
            .OrderByDescending(k => k.Signals.Length)
            .ThenBy(k => k.Name, StringComparer.Ordinal))
        {
            if (found.Count >= MostAdded || Match(impurity, free, input.Spectrum.FrequencyMHz) is not { } matched)
            {
                continue;
            }

            found.Add(matched.Substance);
            free.RemoveAll(matched.Regions.Contains);
        }

        return found.ToImmutable();
    }

    /// <summary>Names of impurities with a signal in a region, for the reader of a left-over.</summary>
    public static ImmutableArray<string> Candidates(FitInput input, Interval region) =>
    [
        .. input.Known
            .Where(k => k.Signals.Any(s => s.ShiftPpm > region.Low - TolerancePpm && s.ShiftPpm < region.High + TolerancePpm))
            .Select(k => k.Name)
            .Distinct()
            .Order(StringComparer.Ordinal),
    ];

    private static (KnownSubstance Substance, List<LeftOverRegion> Regions)? Match(
        KnownSubstance impurity, List<LeftOverRegion> free, double frequencyMHz)
    {
        var regions = new List<LeftOverRegion>();
        var signals = ImmutableArray.CreateBuilder<KnownSignal>();
        foreach (KnownSignal signal in impurity.Signals)
        {
            (LeftOverRegion Region, double Place)? best = null;
            foreach (LeftOverRegion region in free)
            {
                if (Place(signal, region, frequencyMHz) is { } place
                    && (best is null || Math.Abs(place - signal.ShiftPpm) < Math.Abs(best.Value.Place - signal.ShiftPpm)))
                {
                    best = (region, place);
                }
            }

            if (best is null)
            {
                return null;
            }

            regions.Add(best.Value.Region);
            signals.Add(signal with { ShiftPpm = best.Value.Place });
        }

        double[] perProton = [.. regions.Zip(impurity.Signals, (r, s) => r.Area / s.Protons)];
        bool consistent = perProton.Max() < 3 * perProton.Min();
        return consistent ? (impurity with { Signals = signals.ToImmutable() }, regions) : null;
    }

    /// <summary>Centre of the region's maxima where it fits the signal's place and number of lines.</summary>
    private static double? Place(KnownSignal signal, LeftOverRegion region, double frequencyMHz)
    {
        int strong = signal.Lines.Count(l => l.Intensity > 0.12 * signal.Protons);
        if (region.MaximaPpm.IsEmpty || (strong == 1 && region.MaximaPpm.Length > 2) || (strong > 1 && region.MaximaPpm.Length < 2))
        {
            return null;
        }

        double centre = 0.5 * (region.MaximaPpm.Max() + region.MaximaPpm.Min());
        double span = (region.MaximaPpm.Max() - region.MaximaPpm.Min()) * frequencyMHz;
        double expected = signal.Lines.Max(l => l.OffsetHertz) - signal.Lines.Min(l => l.OffsetHertz);
        return Math.Abs(centre - signal.ShiftPpm) < TolerancePpm && Math.Abs(span - expected) < Math.Max(4, 0.6 * expected)
            ? centre
            : null;
    }
}
