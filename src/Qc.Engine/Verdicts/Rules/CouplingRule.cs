using Qc.Engine.Fitting;
using Qc.Engine.Prediction;
using Qc.Engine.Structures;

namespace Qc.Engine.Verdicts.Rules;

/// <summary>
/// identity.coupling: each coupling that the spectrum determines agrees with the expected one. Where a rule is itself
/// uncertain (a vicinal coupling in a chain with a stereocentre, say), twice its standard uncertainty replaces a
/// smaller tolerance.
/// </summary>
internal static class CouplingRule
{
    public const string Id = "identity.coupling";
    private const double SmallestJudgedHertz = 2;

    public static IEnumerable<Finding> Judge(JudgedSpectrum judged)
    {
        foreach (CouplingFit fit in judged.Fit.Couplings.Where(c => c.Determined))
        {
            ExpectedCoupling? expected = judged.Expectation.Couplings.FirstOrDefault(c => c.Parameter == fit.Parameter);
            if (expected is null || Math.Abs(expected.Hertz) < SmallestJudgedHertz)
            {
                continue;
            }

            ProtonGroup a = Group(judged, expected.SetA);
            ProtonGroup b = Group(judged, expected.SetB);
            // Between equivalent protons only a few weak lines tell the coupling; shape faults move them as much.
            if (a == b)
            {
                continue;
            }

            if (!judged.IsAsserted(a) || !judged.IsAsserted(b) || !IsClear(judged, a) || !IsClear(judged, b))
            {
                continue;
            }

            double stated = judged.HasReference
                ? judged.Criteria.Identity.CouplingToleranceReferenceHertz
                : judged.Criteria.Identity.CouplingToleranceHertz;
            double tolerance = Math.Max(stated, 2 * expected.StandardUncertaintyHertz);
            double observed = Math.Abs(fit.Hertz);
            double centre = Math.Abs(expected.Hertz);
            bool passes = Math.Abs(observed - centre) <= tolerance;
            string pair = $"{a.Name}, {b.Name}";
            yield return new Finding(
                Id,
                pair,
                $"{a.Name} and {b.Name} couple with {Say.Tenth(observed)} Hz; expected {Say.Tenth(centre)} ± {Say.Tenth(tolerance)} Hz.",
                passes ? Outcome.Pass : Outcome.Flag,
                observed,
                fit.StandardUncertaintyHertz,
                Math.Max(0, centre - tolerance),
                centre + tolerance,
                "Hz",
                [judged.Fit.Groups[a.Index].RegionPpm, judged.Fit.Groups[b.Index].RegionPpm]);
        }
    }

    private static ProtonGroup Group(JudgedSpectrum judged, int set) =>
        judged.Expectation.Protons.Groups[judged.Expectation.Protons.Sets[set].Group];

    /// <summary>A coupling read from a region that the model does not draw well says nothing.</summary>
    private static bool IsClear(JudgedSpectrum judged, ProtonGroup group)
    {
        GroupFit fit = judged.Fit.Groups[group.Index];
        return fit.Found && fit.Alone && fit.PatternMisfit <= PatternRule.LargestMisfit;
    }
}
