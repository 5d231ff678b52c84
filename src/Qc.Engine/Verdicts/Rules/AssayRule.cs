using System.Globalization;
using Qc.Engine.Quantities;
using Qc.Engine.Values;

namespace Qc.Engine.Verdicts.Rules;

/// <summary>
/// assay.massFraction and assay.relaxation: the mass fraction lies within its limits by the stated decision rule, and the
/// time between scans lets an integral be trusted. An assay without known relaxation is flagged, not computed silently.
/// </summary>
internal static class AssayRule
{
    public const string MassFraction = "assay.massFraction";
    public const string Relaxation = "assay.relaxation";

    public static IEnumerable<Finding> Judge(JudgedSpectrum judged, (Quantity Quantity, Uncertain MassFraction)? assay)
    {
        if (judged.Criteria.Assay is not { } criteria)
        {
            yield break;
        }

        if (assay is not { } found)
        {
            yield return new Finding(
                MassFraction,
                "assay",
                "The specification asks for an assay, but the sample mass, the internal standard's mass or its signal is missing.",
                Outcome.Flag,
                null,
                null,
                criteria.LowPercent,
                criteria.HighPercent,
                "% (m/m)");
            yield break;
        }

        Quantity quantity = found.Quantity;
        bool accepted = DecisionRule.Accepts(
            quantity.Value, quantity.ExpandedUncertainty, criteria.LowPercent, criteria.HighPercent, criteria.GuardBandMultiple);
        string rule = criteria.GuardBandMultiple == 0
            ? "simple acceptance"
            : $"guard band {criteria.GuardBandMultiple.ToString("0.##", CultureInfo.InvariantCulture)} U";
        yield return new Finding(
            MassFraction,
            "assay",
            $"The assay is {Say.Coarse(quantity.Value)} ± {Say.Coarse(quantity.ExpandedUncertainty)} % (m/m), k = 2; "
            + $"{(accepted ? "within" : "not within")} {Say.Tenth(criteria.LowPercent)} to {Say.Tenth(criteria.HighPercent)} % by {rule}.",
            accepted ? Outcome.Pass : Outcome.Flag,
            quantity.Value,
            quantity.ExpandedUncertainty / 2,
            criteria.LowPercent,
            criteria.HighPercent,
            "% (m/m)");

        double? repetition = judged.RepetitionTimeSeconds;
        bool relaxed = repetition >= criteria.RepetitionTimeSeconds;
        yield return new Finding(
            Relaxation,
            "assay",
            repetition is { } seconds
                ? $"Scans follow each other every {Say.Tenth(seconds)} s; full relaxation needs {Say.Tenth(criteria.RepetitionTimeSeconds)} s."
                : "The file does not state the time between scans, so the integrals may be those of unrelaxed protons.",
            relaxed ? Outcome.Pass : Outcome.Flag,
            repetition,
            null,
            criteria.RepetitionTimeSeconds,
            null,
            "s");
    }
}
