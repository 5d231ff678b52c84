using Qc.Engine.Fitting;
using Qc.Engine.Structures;

namespace Qc.Engine.Verdicts.Rules;

/// <summary>
/// identity.substance: much missing and much left over at once means another substance altogether; that is said first.
/// </summary>
internal static class SubstanceRule
{
    public const string Id = "identity.substance";
    private const double MuchShare = 0.4;

    public static IEnumerable<Finding> Judge(JudgedSpectrum judged, double leftOverMolPercent)
    {
        double expected = judged.ExpectedProtons;
        double good = judged.Expectation.Protons.Groups.Where(judged.IsAsserted).Sum(g => IsAsExpected(judged, g) ? (double)g.Count : 0);
        double missingShare = expected > 0 ? 1 - (good / expected) : 0;
        if (missingShare >= MuchShare && (leftOverMolPercent >= 100 * MuchShare || judged.Fit.AreaPerProton <= 0))
        {
            yield return new Finding(
                Id,
                judged.Name,
                $"The spectrum is not that of {judged.Request.ProductName}: {Say.Whole(100 * missingShare)} % of its protons are not where they should be, "
                + "and much of the signal belongs to something else.",
                Outcome.Flag);
        }
    }

    private static bool IsAsExpected(JudgedSpectrum judged, ProtonGroup group)
    {
        GroupFit fit = judged.Fit.Groups[group.Index];
        return fit.Found
            && Math.Abs(fit.ShiftPpm - judged.Expectation.Shifts[group.Index].ShiftPpm) <= judged.ShiftTolerancePpm(group.Index)
            && Math.Abs(fit.Protons - group.Count) <= 0.5 * group.Count;
    }
}
