using Qc.Engine.Fitting;
using Qc.Engine.Prediction;
using Qc.Engine.Structures;

namespace Qc.Engine.Verdicts.Rules;

/// <summary>
/// identity.shift: each group that does not exchange lies where it is expected, within the tolerance. A group that the
/// tables do not cover has no sure place and is not judged by it.
/// </summary>
internal static class ShiftRule
{
    public const string Id = "identity.shift";

    public static IEnumerable<Finding> Judge(JudgedSpectrum judged)
    {
        foreach (ProtonGroup group in judged.Expectation.Protons.Groups.Where(judged.IsAsserted))
        {
            GroupFit fit = judged.Fit.Groups[group.Index];
            ExpectedShift expected = judged.Expectation.Shifts[group.Index];
            if (!fit.Found)
            {
                continue;
            }

            double tolerance = judged.ShiftTolerancePpm(group.Index);
            double observed = fit.ShiftPpm - judged.OffsetPpm;
            bool passes = Math.Abs(observed - expected.ShiftPpm) <= tolerance;
            string verb = passes ? "lies" : "lies outside its limits";
            yield return new Finding(
                Id,
                group.Name,
                $"{Say.Group(group)} {verb} at {Say.Ppm(observed)} ppm; expected {Say.Coarse(expected.ShiftPpm)} ± {Say.Coarse(tolerance)} ppm.",
                passes ? Outcome.Pass : Outcome.Flag,
                observed,
                fit.ShiftStandardUncertaintyPpm,
                expected.ShiftPpm - tolerance,
                expected.ShiftPpm + tolerance,
                "ppm",
                [fit.RegionPpm]);
        }
    }
}
