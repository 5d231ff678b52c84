using Qc.Engine.Fitting;
using Qc.Engine.Prediction;
using Qc.Engine.Structures;
using Qc.Engine.Values;

namespace Qc.Engine.Verdicts.Rules;

/// <summary>identity.present: every expected group that does not exchange and lies in the window has signal.</summary>
internal static class PresenceRule
{
    public const string Id = "identity.present";

    public static IEnumerable<Finding> Judge(JudgedSpectrum judged)
    {
        foreach (ProtonGroup group in judged.Expectation.Protons.Groups.Where(judged.IsAsserted))
        {
            GroupFit fit = judged.Fit.Groups[group.Index];
            if (fit.Found)
            {
                continue;
            }

            ExpectedShift expected = judged.Expectation.Shifts[group.Index];
            double tolerance = judged.ShiftTolerancePpm(group.Index);
            var region = new Interval(expected.ShiftPpm - tolerance, expected.ShiftPpm + tolerance);
            yield return new Finding(
                Id,
                group.Name,
                $"No signal was found for {Say.Group(group)}, expected near {Say.Coarse(expected.ShiftPpm)} ppm.",
                Outcome.Flag,
                0,
                null,
                group.Count,
                group.Count,
                "H",
                [region]);
        }
    }
}
