using System.Collections.Immutable;
using Qc.Engine.Data;

namespace Qc.Engine.Processing;

/// <summary>A solvent seen in a spectrum.</summary>
/// <param name="Solvent">Its name.</param>
/// <param name="OffsetPpm">Place of its residual signal minus the table's; what the axis is off by, if the table's shift holds here.</param>
/// <param name="ByPattern">Whether a splitting by deuterium was seen, so that the place can be relied on.</param>
internal readonly record struct SolventEvidence(string Solvent, double OffsetPpm, bool ByPattern);

/// <summary>
/// Which solvent a spectrum shows. The solvents that header and method name are looked for first, and further from their
/// place; another is believed only by a clear splitting by deuterium close to its place, or a lesser sign together with its
/// water. A mere line is never taken for a solvent that nobody named, but for CHCl3 with the water of CDCl3 beside it.
/// </summary>
internal sealed class SolventRecognition(Spectrum spectrum, ImmutableArray<Maximum> maxima, LoneLines lone, ImmutableArray<string> named, ImmutableArray<double> zeros)
{
    private const double NamedReachPpm = 0.5;
    private const double OtherReachPpm = 0.06;
    private const double SurePpm = 0.03;
    private const double WaterReachPpm = 0.1;
    private const double WidestSolventHertz = 4;
    private const double WidestWaterHertz = 20;

    /// <summary>CHCl3 lies at 7.20 to 7.29 ppm, with concentration and partners (seen on measured spectra; 7.26 when dilute).</summary>
    public static bool IsPlaceOfChloroform(double ppm) => ppm is >= 7.19 and <= 7.30;

    /// <summary>HDO lies at 4.63 (37 °C) to 4.95 ppm (10 °C): Gottlieb 1997, 5.060 − 0.0122 T + 2.11e-5 T².</summary>
    public static bool IsPlaceOfHdo(double ppm) => ppm is >= 4.6 and <= 4.97;

    /// <summary>The solvent, or null where none is recognised.</summary>
    public SolventEvidence? Find()
    {
        SolventEvidence? pattern = BestPattern(named);
        if (pattern is not null)
        {
            return pattern;
        }

        ImmutableArray<string> others = [.. SubstanceTable.Solvents.Where(s => !named.Contains(s))];
        SolventEvidence? other = BestPattern(others);
        SolventEvidence? line = named.Select(NamedLine).FirstOrDefault(e => e is not null);
        if (other is { } sure && (line is null || (Math.Abs(NearestZero(sure.OffsetPpm)) < SurePpm && HasWater(sure.Solvent, sure.OffsetPpm))))
        {
            return other;
        }

        return line
            ?? named.Select(s => Merged(s, waterNeeded: false)).FirstOrDefault(e => e is not null)
            ?? others.Select(s => Merged(s, waterNeeded: true)).FirstOrDefault(e => e is not null)
            ?? UnnamedLine();
    }

    private double NearestZero(double offset) => zeros.Append(0).Select(z => offset - z).MinBy(Math.Abs);

    private SolventEvidence? BestPattern(ImmutableArray<string> solvents)
    {
        SolventEvidence? best = null;
        double bestWeight = 0;
        foreach (SubstanceSignal row in solvents.SelectMany(s => SubstanceTable.In(s)).Where(r => r.Role == "solvent" && IsPattern(r)))
        {
            bool isNamed = named.Contains(row.Solvent);
            double reach = isNamed ? NamedReachPpm : OtherReachPpm;
            foreach (Maximum top in Tops(row))
            {
                double roughly = Ppm(top) - row.ShiftPpm;
                if ((isNamed ? Math.Abs(roughly) : Math.Abs(NearestZero(roughly))) > reach
                    || DeuteriumPattern.Fit(spectrum, top.Hertz, row.Multiplicity == "quint-D", row.Hertz) is not { } fit)
                {
                    continue;
                }

                double offset = (fit.CentreHertz / spectrum.FrequencyMHz) - row.ShiftPpm;
                bool close = isNamed && Math.Abs(NearestZero(offset)) < WaterReachPpm;
                double weight = fit.Height * (1 - fit.AgainstRivals);
                if (fit.Explained > 0.97 && fit.AgainstRivals < (close ? 0.9 : 0.6) && weight > bestWeight)
                {
                    (best, bestWeight) = (new SolventEvidence(row.Solvent, offset, ByPattern: true), weight);
                }
            }
        }

        return best;
    }

    private static bool IsPattern(SubstanceSignal row) => row.Multiplicity is "quint-D" or "trip-D";

    private double Ppm(Maximum m) => m.Hertz / spectrum.FrequencyMHz;

    /// <summary>Maxima within reach that are the highest within the pattern's half width.</summary>
    private IEnumerable<Maximum> Tops(SubstanceSignal row) => maxima.Where(m =>
        Math.Abs(Ppm(m) - row.ShiftPpm) <= NamedReachPpm + OtherReachPpm
        && m.Height > 15 * spectrum.NoiseStandardDeviation
        && !maxima.Any(o => o.Height > m.Height && Math.Abs(o.Hertz - m.Hertz) < 2.5 * row.Hertz));

    /// <summary>A named solvent whose residual signal is a line, at its place.</summary>
    private SolventEvidence? NamedLine(string solvent) => solvent switch
    {
        "CDCl3" => Chloroform(),
        "D2O" => Hdo(),
        "C6D6" => Line("C6D6", 7.16, WidestSolventHertz),
        "THF-d8" when lone.Near(1.72, OtherReachPpm, WidestWaterHertz).Length > 0 => Line("THF-d8", 3.58, WidestWaterHertz),
        _ => null,
    };

    private SolventEvidence? Line(string solvent, double ppm, double widestHertz) =>
        lone.Near(ppm, OtherReachPpm, widestHertz) is [var line, ..] ? new SolventEvidence(solvent, lone.Ppm(line) - ppm, ByPattern: false) : null;

    /// <summary>
    /// CHCl3 at its place on the file's axis; else at 7.26 from a line that may be TMS; else the only lone line within half a
    /// ppm whose distance to a line at the place of water agrees.
    /// </summary>
    private SolventEvidence? Chloroform()
    {
        ImmutableArray<Maximum> near = lone.Near(7.26, NamedReachPpm, WidestSolventHertz);
        Maximum[] found = [.. near.Where(m => IsPlaceOfChloroform(lone.Ppm(m)))];
        if (found.Length == 0)
        {
            found = [.. near.Where(m => zeros.Any(z => Math.Abs(lone.Ppm(m) - z - 7.26) < SurePpm))];
        }

        if (found.Length == 0)
        {
            found = [.. near.Where(m => HasWater("CDCl3", lone.Ppm(m) - 7.26))];
            found = found.Length == 1 ? found : [];
        }

        return found.Length == 0 ? null : new SolventEvidence("CDCl3", lone.Ppm(found[0]) - 7.26, ByPattern: false);
    }

    private SolventEvidence? Hdo()
    {
        Maximum[] found = [.. lone.All
            .Where(m => m.WidthHertz < WidestWaterHertz && zeros.Append(0).Any(z => IsPlaceOfHdo(lone.Ppm(m) - z)))
            .OrderByDescending(m => m.Height)];
        return found.Length == 0 ? null : new SolventEvidence("D2O", lone.Ppm(found[0]) - 4.79, ByPattern: false);
    }

    /// <summary>A quintet whose lines have run together: one hump at the place, one and a half to four couplings wide.</summary>
    private SolventEvidence? Merged(string solvent, bool waterNeeded)
    {
        foreach (SubstanceSignal row in SubstanceTable.In(solvent).Where(r => r.Role == "solvent" && r.Multiplicity == "quint-D"))
        {
            foreach (Maximum hump in lone.Near(row.ShiftPpm, OtherReachPpm, 4 * row.Hertz).Where(m => m.WidthHertz > 1.5 * row.Hertz))
            {
                double offset = lone.Ppm(hump) - row.ShiftPpm;
                if (!waterNeeded || (HasWater(solvent, offset) && named.All(IsMeasured)))
                {
                    return new SolventEvidence(solvent, offset, ByPattern: false);
                }
            }
        }

        return null;
    }

    /// <summary>A line for a solvent that nobody named: CHCl3 with water beside it; or the highest line of all at the place of HDO, with DSS.</summary>
    private SolventEvidence? UnnamedLine()
    {
        if (!named.All(IsMeasured))
        {
            return null;
        }

        SolventEvidence? chloroform = lone.Near(7.26, SurePpm, WidestSolventHertz).Any(m => HasWater("CDCl3", lone.Ppm(m) - 7.26))
            ? Line("CDCl3", 7.26, WidestSolventHertz)
            : null;
        return chloroform ?? (named.Length == 0 && zeros.Length > 0 && Hdo() is { } water
            && Math.Abs(Ppm(maxima.MaxBy(m => m.Height)) - 4.79 - water.OffsetPpm) < 1e-9
            ? water
            : null);
    }

    private bool IsMeasured(string solvent) =>
        SubstanceTable.In(solvent).Where(r => r.Role == "solvent").All(r => spectrum.WindowPpm.Contains(r.ShiftPpm));

    /// <summary>Whether a lone line lies at the place of water in a solvent, the axis being off by so much.</summary>
    private bool HasWater(string solvent, double offset) => SubstanceTable.In(solvent)
        .Any(r => r.Role == "water" && lone.Near(r.ShiftPpm + offset, WaterReachPpm, WidestWaterHertz).Length > 0);
}
