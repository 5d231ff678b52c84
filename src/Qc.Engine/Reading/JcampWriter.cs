using System.Globalization;
using System.Text;
using Qc.Engine.Reading.JcampDx;

namespace Qc.Engine.Reading;

/// <summary>How ordinates are written.</summary>
public enum OrdinateForm
{
    /// <summary>Packed differences of integers times a factor, with a check ordinate on each line.</summary>
    DifDup,

    /// <summary>Plain numbers; exact for any ordinates where no factor is given.</summary>
    Affn,
}

/// <summary>
/// Writes a measurement as JCAMP-DX 5.01. Read back, the axis is bit for bit the same, and so are the ordinates where they are
/// integers, multiples of the given factor, or written as <see cref="OrdinateForm.Affn"/> without a factor. Otherwise each is
/// rounded to a multiple of the factor, which is the largest ordinate divided by 2^28.
/// </summary>
/// <remarks>
/// Facts without a standard label go into private ones: <c>$SF</c> (frequency of 0 ppm in MHz), <c>$RELAXATION DELAY</c> (s),
/// <c>$PULSE ANGLE</c> (degrees), <c>$GRPDLY</c> (points), <c>$AXIS REFERENCED</c>. Line breaks in a text become blanks, and
/// "$$", which would start a comment, becomes "$ $".
/// </remarks>
public static class JcampWriter
{
    private const double DefaultScale = 1 << 28;
    private const double LargestInteger = 4e14;

    /// <summary>Writes a spectrum: one part as XYDATA, two as pages of NTUPLES; the axis in ppm.</summary>
    /// <param name="spectrum">At least 2 points.</param>
    /// <param name="form">Form of the ordinates.</param>
    /// <param name="factor">Value of one integer step; null: 1 where all ordinates are integers, else chosen.</param>
    /// <exception cref="ArgumentException">
    /// Too few points, parts of different length, or ordinates that are not finite or too large for the factor.
    /// </exception>
    public static byte[] Write(SpectrumMeasurement spectrum, OrdinateForm form = OrdinateForm.DifDup, double? factor = null)
    {
        ArgumentNullException.ThrowIfNull(spectrum);
        var parts = spectrum.Imaginary is { } imaginary ? (double[][])[spectrum.Real, imaginary] : [spectrum.Real];
        var ordinates = new Ordinates(parts, form, factor);
        var last = spectrum.FirstPpm + (spectrum.PpmPerPoint * (spectrum.Real.Length - 1));
        var axis = new Axis("FREQUENCY", "PPM", spectrum.FirstPpm, last, 1, PrintedPpm(spectrum));

        var text = Header("NMR SPECTRUM", parts.Length == 1 ? "XYDATA" : "NTUPLES", spectrum.Facts);
        Label(text, "$AXIS REFERENCED", spectrum.AxisIsReferenced ? "YES" : "NO");
        Label(text, "$SF", spectrum.Facts.ZeroPpmFrequencyMHz);
        Label(text, "DELTAX", spectrum.PpmPerPoint);
        if (parts.Length > 1)
        {
            return Pages(text, "NMR SPECTRUM", "SPECTRUM", axis, ordinates);
        }

        Label(text, "XUNITS", axis.Units);
        Label(text, "YUNITS", "ARBITRARY UNITS");
        Label(text, "XFACTOR", 1);
        Label(text, "YFACTOR", ordinates.Factor);
        Label(text, "FIRSTX", axis.First);
        Label(text, "LASTX", axis.Last);
        Label(text, "NPOINTS", ordinates.Count);
        Label(text, "FIRSTY", ordinates.First(0));
        Label(text, "XYDATA", "(X++(Y..Y))");
        ordinates.Write(text, 0, axis.Printed);
        return End(text);
    }

    /// <summary>Writes an FID as pages of NTUPLES; the axis in seconds.</summary>
    /// <param name="fid">At least 2 points. Its centre is written as the frequency of 0 ppm, so that it returns to 1e-9 ppm.</param>
    /// <param name="form">Form of the ordinates.</param>
    /// <param name="factor">Value of one integer step; null: 1 where all ordinates are integers, else chosen.</param>
    /// <exception cref="ArgumentException">As for a spectrum.</exception>
    public static byte[] Write(FidMeasurement fid, OrdinateForm form = OrdinateForm.DifDup, double? factor = null)
    {
        ArgumentNullException.ThrowIfNull(fid);
        var ordinates = new Ordinates([fid.Real, fid.Imaginary], form, factor);
        var axis = new Axis(
            "TIME", "SECONDS", 0, fid.DwellSeconds * (fid.Real.Length - 1), fid.DwellSeconds, i => Number(i));

        var text = Header("NMR FID", "NTUPLES", fid.Facts);
        Label(text, ".DELAY", "(0, 0)");
        Label(text, ".ACQUISITION MODE", "SIMULTANEOUS");
        Label(text, "$GRPDLY", fid.GroupDelayPoints);
        Label(
            text,
            "$SF",
            fid.CentrePpm is { } centre ? fid.Facts.ObserveFrequencyMHz / (1 + (centre * 1e-6)) : fid.Facts.ZeroPpmFrequencyMHz);
        return Pages(text, "NMR FID", "FID", axis, ordinates);
    }

    private static StringBuilder Header(string dataType, string dataClass, AcquisitionFacts facts)
    {
        var text = new StringBuilder();
        Label(text, "TITLE", facts.Title);
        Label(text, "JCAMP-DX", "5.01");
        Label(text, "DATA TYPE", dataType);
        Label(text, "DATA CLASS", dataClass);
        Label(text, "ORIGIN", "Qc");
        Label(text, "OWNER", "not stated");
        Label(text, ".OBSERVE FREQUENCY", facts.ObserveFrequencyMHz);
        Label(text, ".OBSERVE NUCLEUS", "^" + facts.Nucleus);
        if (facts.SolventLabel is { } solvent)
        {
            Label(text, ".SOLVENT NAME", solvent);
        }

        Label(text, ".AVERAGES", facts.Scans);
        Label(text, ".ACQUISITION TIME", facts.AcquisitionTimeSeconds);
        Label(text, "TEMPERATURE", facts.TemperatureKelvin is { } kelvin ? Math.Round(kelvin - 273.15, 6) : null);
        Label(text, "$RELAXATION DELAY", facts.RelaxationDelaySeconds);
        Label(text, "$PULSE ANGLE", facts.PulseAngleDegrees);
        return text;
    }

    private static byte[] Pages(StringBuilder text, string name, string part, Axis axis, Ordinates ordinates)
    {
        var (count, y) = (Number(ordinates.Count), Number(ordinates.Factor));
        Label(text, "NTUPLES", name);
        Label(text, "VAR_NAME", $"{axis.Name}, {part}/REAL, {part}/IMAG, PAGE NUMBER");
        Label(text, "SYMBOL", "X, R, I, N");
        Label(text, "VAR_TYPE", "INDEPENDENT, DEPENDENT, DEPENDENT, PAGE");
        Label(text, "VAR_FORM", ordinates.Form == OrdinateForm.Affn ? "AFFN, AFFN, AFFN, AFFN" : "AFFN, ASDF, ASDF, AFFN");
        Label(text, "VAR_DIM", $"{count}, {count}, {count}, 2");
        Label(text, "UNITS", $"{axis.Units}, ARBITRARY UNITS, ARBITRARY UNITS,");
        Label(text, "FIRST", $"{Number(axis.First)}, {Number(ordinates.First(0))}, {Number(ordinates.First(1))}, 1");
        Label(text, "LAST", $"{Number(axis.Last)}, {Number(ordinates.Last(0))}, {Number(ordinates.Last(1))}, 2");
        Label(text, "FACTOR", $"{Number(axis.Factor)}, {y}, {y}, 1");
        for (var page = 0; page < 2; page++)
        {
            Label(text, "PAGE", $"N={Number(page + 1)}");
            Label(text, "DATA TABLE", page == 0 ? "(X++(R..R)), XYDATA" : "(X++(I..I)), XYDATA");
            ordinates.Write(text, page, axis.Printed);
        }

        Label(text, "END NTUPLES", name);
        return End(text);
    }

    private static byte[] End(StringBuilder text)
    {
        Label(text, "END", "");
        return Encoding.UTF8.GetBytes(text.ToString());
    }

    // Printed to a hundredth of a step: enough for the x-check, short enough for the line.
    private static Func<int, string> PrintedPpm(SpectrumMeasurement spectrum)
    {
        var digits = (int)Math.Clamp(Math.Ceiling(-Math.Log10(Math.Abs(spectrum.PpmPerPoint))) + 2, 0, 15);
        var format = "F" + digits.ToString(CultureInfo.InvariantCulture);
        return i => (spectrum.FirstPpm + (spectrum.PpmPerPoint * i)).ToString(format, CultureInfo.InvariantCulture);
    }

    private static void Label(StringBuilder text, string label, double? value)
    {
        if (value is { } number)
        {
            Label(text, label, Number(number));
        }
    }

    private static void Label(StringBuilder text, string label, string value)
    {
        var line = value.ReplaceLineEndings(" ").Replace("$$", "$ $", StringComparison.Ordinal);
        text.Append("##").Append(label).Append("= ").Append(line).Append('\n');
    }

    private static string Number(double value) => value.ToString("R", CultureInfo.InvariantCulture);

    private sealed record Axis(string Name, string Units, double First, double Last, double Factor, Func<int, string> Printed);

    /// <summary>The parts of a measurement as integers times a factor, or as they are.</summary>
    private sealed class Ordinates
    {
        private readonly double[][] _parts;
        private readonly bool _asTheyAre;

        public Ordinates(double[][] parts, OrdinateForm form, double? factor)
        {
            Form = form;
            Count = parts[0].Length;
            if (Count < 2 || parts.Any(p => p.Length != Count))
            {
                throw new ArgumentException("A measurement needs at least 2 points, and parts of one length.", nameof(parts));
            }

            var largest = parts.Max(p => p.Max(Math.Abs));
            _asTheyAre = form == OrdinateForm.Affn && factor is null;
            var isInteger = parts.All(p => p.All(v => v == Math.Floor(v)));
            Factor = factor ?? (_asTheyAre || (isInteger && largest < LargestInteger) ? 1 : largest / DefaultScale);
            if (!parts.All(p => p.All(double.IsFinite))
                || !(Math.Abs(Factor) > 0)
                || (!_asTheyAre && !(largest / Math.Abs(Factor) < LargestInteger)))
            {
                throw new ArgumentException("Ordinates must be finite and, divided by the factor, below 4e14.", nameof(parts));
            }

            _parts = parts;
        }

        public OrdinateForm Form { get; }

        public int Count { get; }

        public double Factor { get; }

        public double First(int part) => _asTheyAre ? _parts[part][0] : Scaled(_parts[part][0]) * Factor;

        public double Last(int part) => _asTheyAre ? _parts[part][^1] : Scaled(_parts[part][^1]) * Factor;

        public void Write(StringBuilder text, int part, Func<int, string> abscissa)
        {
            if (Form == OrdinateForm.DifDup)
            {
                AsdfEncoder.WriteDifDup(text, Array.ConvertAll(_parts[part], Scaled), abscissa);
                return;
            }

            AsdfEncoder.WriteAffn(
                text,
                Count,
                i => _asTheyAre ? Number(_parts[part][i]) : Scaled(_parts[part][i]).ToString(CultureInfo.InvariantCulture),
                abscissa);
        }

        private long Scaled(double value) => (long)Math.Round(value / Factor);
    }
}
