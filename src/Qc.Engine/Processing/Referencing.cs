using System.Collections.Immutable;
using Qc.Engine.Data;

namespace Qc.Engine.Processing;

/// <summary>What the axis of a spectrum rests on.</summary>
/// <param name="CorrectionPpm">To be added to the axis; null where nothing was found to rest it on.</param>
/// <param name="By">"TMS", "DSS", "residual solvent" or "file".</param>
/// <param name="Solvent">Solvent that the spectrum shows, null where none was recognised.</param>
internal sealed record AxisReference(double? CorrectionPpm, string By, string? Solvent);

/// <summary>
/// References the axis: by TMS or DSS where it is there, else by the residual solvent. A solvent whose residual signal is a
/// deuterium quintet is recognised by it anywhere within half a ppm of its place; CHCl3, a mere singlet that may hide among
/// aromatic protons and moves with concentration, only close to its place.
/// </summary>
internal static class Referencing
{
    private const double ReachPpm = 0.5;
    private const double ChloroformReachPpm = 0.04;
    private const double SmallestSolventCorrectionPpm = 0.03;
    private const double ReferenceAgreementPpm = 0.06;

    public static AxisReference Find(Spectrum spectrum, ImmutableArray<MeasuredSignal> signals, string? prescribed, string? header)
    {
        Maximum[] maxima = [.. signals.SelectMany(s => s.Maxima)];
        double frequency = spectrum.FrequencyMHz;
        (string Solvent, double OffsetPpm)? quintet = FindQuintet(maxima, frequency, prescribed, header);
        double? reference = FindReference(maxima, spectrum, quintet?.OffsetPpm);
        bool chloroform = FindChloroform(signals, frequency, reference ?? 0);
        string? solvent = quintet?.Solvent ?? (chloroform && (prescribed is null or "CDCl3" || header == "CDCl3") ? "CDCl3" : null);
        if (reference is { } offset)
        {
            return new AxisReference(-offset, solvent == "D2O" ? "DSS" : "TMS", solvent);
        }

        if (quintet is { } found)
        {
            double correction = -found.OffsetPpm;
            return new AxisReference(Math.Abs(correction) < SmallestSolventCorrectionPpm ? 0 : correction, "residual solvent", solvent);
        }

        return chloroform ? new AxisReference(0, "residual solvent", solvent) : new AxisReference(null, "file", solvent);
    }

    /// <summary>The quintet solvent that the spectrum shows; the prescribed and the stated one are looked for first.</summary>
    private static (string Solvent, double OffsetPpm)? FindQuintet(Maximum[] maxima, double frequency, string? prescribed, string? header)
    {
        SubstanceSignal[] rows =
        [
            .. SubstanceTable.Solvents
                .OrderBy(s => s == prescribed ? 0 : s == header ? 1 : 2)
                .SelectMany(s => SubstanceTable.In(s).Where(r => r.Role == "solvent" && r.Multiplicity == "quint-D")),
        ];
        (string Solvent, double OffsetPpm)? best = null;
        double bestHeight = 0;
        foreach (SubstanceSignal row in rows)
        {
            bool expected = row.Solvent == prescribed || row.Solvent == header;
            if (best is not null && !expected)
            {
                break;
            }

            foreach (Maximum centre in maxima)
            {
                double offset = (centre.Hertz / frequency) - row.ShiftPpm;
                bool near = Math.Abs(offset) < (expected ? ReachPpm : 0.25);
                if (near && centre.Height > bestHeight && IsQuintet(maxima, centre, row.Hertz))
                {
                    (best, bestHeight) = ((row.Solvent, offset), centre.Height);
                }
            }
        }

        return best;
    }

    private static bool IsQuintet(Maximum[] maxima, Maximum centre, double hertz)
    {
        double tolerance = 0.22 * hertz;
        double Height(double place) => maxima
            .Where(m => Math.Abs(m.Hertz - place) < tolerance)
            .Select(m => m.Height)
            .DefaultIfEmpty(0)
            .Max();
        double inner = Math.Min(Height(centre.Hertz - hertz), Height(centre.Hertz + hertz)) / centre.Height;
        double innerMost = Math.Max(Height(centre.Hertz - hertz), Height(centre.Hertz + hertz)) / centre.Height;
        double outer = Math.Min(Height(centre.Hertz - (2 * hertz)), Height(centre.Hertz + (2 * hertz))) / centre.Height;
        return inner > 0.45 && innerMost < 0.95 && outer > 0.12 && outer < 0.7;
    }

    /// <summary>
    /// Offset of TMS or DSS: the sharp lone line nearest to zero (or to where the solvent says zero is). Silicone grease lies
    /// at 0.07 ppm; without a solvent to tell them apart only a line within 0.03 ppm of zero is taken.
    /// </summary>
    private static double? FindReference(Maximum[] maxima, Spectrum spectrum, double? solventOffsetPpm)
    {
        double expected = solventOffsetPpm ?? 0;
        double reach = solventOffsetPpm is null ? 0.03 : ReferenceAgreementPpm;
        Maximum best = maxima
            .Where(m => Math.Abs((m.Hertz / spectrum.FrequencyMHz) - expected) < reach
                && m.Height > 15 * spectrum.NoiseStandardDeviation
                && m.Prominence > 0.7 * m.Height)
            .OrderByDescending(m => m.Height)
            .FirstOrDefault();
        return best.Height > 0 ? best.Hertz / spectrum.FrequencyMHz : null;
    }

    private static bool FindChloroform(ImmutableArray<MeasuredSignal> signals, double frequency, double offsetPpm) =>
        signals.SelectMany(s => s.Maxima).Any(m =>
            Math.Abs((m.Hertz / frequency) - offsetPpm - 7.26) < ChloroformReachPpm && m.Prominence > 0.3 * m.Height);
}
