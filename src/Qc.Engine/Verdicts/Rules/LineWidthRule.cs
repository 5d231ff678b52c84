namespace Qc.Engine.Verdicts.Rules;

/// <summary>
/// suitability.lineWidth: the width at half height of the lines that stand clear; a wide one means a poor shim. The width
/// is rounded to a tenth of a hertz, the place to which the limit is stated, and then compared (rounding rule of the USP
/// General Notices 7.20, from memory).
/// </summary>
internal static class LineWidthRule
{
    public const string Id = "suitability.lineWidth";
    private const double LowFieldMHz = 300;

    public static IEnumerable<Finding> Judge(JudgedSpectrum judged)
    {
        // A 300 MHz instrument has its protons a little below 300.
        bool lowField = judged.Spectrum.FrequencyMHz < LowFieldMHz - 5;
        double limit = lowField ? judged.Criteria.Suitability.LineWidthLowFieldHertz : judged.Criteria.Suitability.LineWidthHertz;
        double width = judged.Fit.MeasuredWidthHertz;
        bool passes = Math.Round(width, 1, MidpointRounding.AwayFromZero) <= limit;
        yield return new Finding(
            Id,
            judged.Name,
            $"Lines are {Say.Coarse(width)} Hz wide at half height; at most {Say.Tenth(limit)} Hz is allowed"
            + (passes ? "." : ": shim and measure again."),
            passes ? Outcome.Pass : Outcome.Flag,
            width,
            null,
            null,
            limit,
            "Hz");
    }
}
