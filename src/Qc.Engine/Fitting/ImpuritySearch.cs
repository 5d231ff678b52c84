using System.Collections.Immutable;
using Qc.Engine.Processing;
using Qc.Engine.Values;

namespace Qc.Engine.Fitting;

/// <summary>Compares what is left over with the table of known impurities.</summary>
internal static class ImpuritySearch
{
    private const double TolerancePpm = 0.025;
    private const int MostAdded = 8;

    /// <summary>
    /// Impurities whose signals find left-over signal at their place, most signals first; each region is given to one
    /// impurity only. A signal may hide under what the model draws already, but at least half of an impurity's signals must
    /// show, and their areas must agree.
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
            if (found.Count >= MostAdded || Match(impurity, free, reading, input.Spectrum) is not { } matched)
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
        KnownSubstance impurity, List<LeftOverRegion> free, FitReading reading, Spectrum spectrum)
    {
        var regions = new List<LeftOverRegion>();
        var perProton = new List<double>();
        var signals = ImmutableArray.CreateBuilder<KnownSignal>();
        foreach (KnownSignal signal in impurity.Signals)
        {
            (LeftOverRegion Region, double Place)? best = null;
            foreach (LeftOverRegion region in free)
            {
                if (Place(signal, region, spectrum.FrequencyMHz) is { } place
                    && (best is null || Math.Abs(place - signal.ShiftPpm) < Math.Abs(best.Value.Place - signal.ShiftPpm)))
                {
                    best = (region, place);
                }
            }

            if (best is { } found)
            {
                regions.Add(found.Region);
                perProton.Add(found.Region.Area / signal.Protons);
                signals.Add(signal with { ShiftPpm = found.Place });
            }
            else if (IsHidden(signal, reading, spectrum))
            {
                signals.Add(signal);
            }
            else
            {
                return null;
            }
        }

        bool enough = 2 * regions.Count >= impurity.Signals.Length && regions.Count > 0;
        return enough && perProton.Max() < 3 * perProton.Min() ? (impurity with { Signals = signals.ToImmutable() }, regions) : null;
    }

    /// <summary>Whether the model draws so much at a signal's place that the signal would not show there.</summary>
    private static bool IsHidden(KnownSignal signal, FitReading reading, Spectrum spectrum)
    {
        int first = Math.Max(0, (int)spectrum.IndexOf(signal.ShiftPpm + TolerancePpm));
        int last = Math.Min(spectrum.Count - 1, (int)spectrum.IndexOf(signal.ShiftPpm - TolerancePpm));
        double drawn = 0;
        for (int i = first; i <= last; i++)
        {
            drawn += reading.Modelled[i] * spectrum.HzPerPoint;
        }

        return drawn > 0.3 * reading.AreaPerProton;
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
