namespace Qc.Engine.Verdicts.Rules;

/// <summary>
/// suitability.axisOffset: the file's axis agrees with TMS or the residual solvent, or, where neither was found, with the
/// common offset of the product's own signals.
/// </summary>
internal static class AxisOffsetRule
{
    public const string Id = "suitability.axisOffset";

    public static IEnumerable<Finding> Judge(JudgedSpectrum judged)
    {
        double limit = judged.HasReference
            ? judged.Criteria.Suitability.AxisOffsetReferencePpm
            : judged.Criteria.Suitability.AxisOffsetPpm;
        double offset;
        double? uncertainty = null;
        string by;
        if (judged.Spectrum.AxisCorrectionPpm is { } correction)
        {
            offset = -correction;
            by = $"by {judged.Spectrum.ReferencedBy}";
        }
        else if (judged.CommonOffsetPpm is { } common)
        {
            offset = common.Value;
            uncertainty = common.StandardUncertainty;
            by = "by the product's own signals, no reference having been found";
        }
        else
        {
            yield break;
        }

        // An offset that is not clear of its own uncertainty accuses nobody.
        bool passes = Math.Abs(offset) <= limit || Math.Abs(offset) < 2 * (uncertainty ?? 0);
        yield return new Finding(
            Id,
            judged.Name,
            $"The file's axis is off by {Say.Ppm(offset)} ppm {by}; at most {Say.Coarse(limit)} ppm is allowed.",
            passes ? Outcome.Pass : Outcome.Flag,
            offset,
            uncertainty,
            -limit,
            limit,
            "ppm");
    }
}
