namespace Qc.Engine.Verdicts.Rules;

/// <summary>suitability.digitalResolution: points are close enough for the lines they draw.</summary>
internal static class DigitalResolutionRule
{
    public const string Id = "suitability.digitalResolution";

    public static IEnumerable<Finding> Judge(JudgedSpectrum judged)
    {
        double limit = judged.Criteria.Suitability.LineWidthsPerPoint * judged.Fit.MeasuredWidthHertz;
        double step = judged.Spectrum.HzPerPoint;
        bool passes = step <= limit;
        yield return new Finding(
            Id,
            judged.Name,
            $"Points lie {Say.Coarse(step)} Hz apart; at most {Say.Coarse(limit)} Hz draws lines of {Say.Coarse(judged.Fit.MeasuredWidthHertz)} Hz"
            + (passes ? "." : ": acquire longer or fill with zeros."),
            passes ? Outcome.Pass : Outcome.Flag,
            step,
            null,
            null,
            limit,
            "Hz");
    }
}
