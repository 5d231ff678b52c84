using Qc.Engine.Fitting;
using Qc.Engine.Prediction;
using Qc.Engine.Structures;

namespace Qc.Engine.Verdicts.Rules;

/// <summary>
/// identity.count: each group that does not exchange has its protons. Groups that share a region are judged together,
/// because only their sum is measured. An exchangeable proton that was not found elsewhere may lie under a group and add
/// to it; it never makes up for what is missing.
/// </summary>
internal static class CountRule
{
    public const string Id = "identity.count";

    public static IEnumerable<Finding> Judge(JudgedSpectrum judged)
    {
        var waiting = judged.Expectation.Protons.Groups
            .Where(g => judged.IsAsserted(g) && judged.Fit.Groups[g.Index].Found)
            .OrderByDescending(g => judged.Fit.Groups[g.Index].ShiftPpm)
            .ToList();
        while (waiting.Count > 0)
        {
            List<ProtonGroup> together = Cluster(judged, waiting);
            waiting.RemoveAll(together.Contains);
            yield return Judge(judged, together);
        }
    }

    private static List<ProtonGroup> Cluster(JudgedSpectrum judged, List<ProtonGroup> waiting)
    {
        var together = new List<ProtonGroup> { waiting[0] };
        for (int i = 0; i < together.Count; i++)
        {
            GroupFit fit = judged.Fit.Groups[together[i].Index];
            together.AddRange(waiting.Where(g =>
                !together.Contains(g) && judged.Fit.Groups[g.Index].RegionPpm.Overlaps(fit.RegionPpm)));
        }

        return together;
    }

    private static Finding Judge(JudgedSpectrum judged, List<ProtonGroup> groups)
    {
        IdentityCriteria identity = judged.Criteria.Identity;
        double expected = groups.Sum(g => (double)g.Count);
        double observed = groups.Sum(g => judged.Fit.Groups[g.Index].Protons);
        double u = Math.Sqrt(groups.Sum(g => Math.Pow(judged.Fit.Groups[g.Index].ProtonsStandardUncertainty, 2)));
        bool reference = groups.All(g => judged.Expectation.Shifts[g.Index].Basis == Basis.Reference);
        double percent = reference ? identity.CountToleranceReferencePercent : identity.CountTolerancePercent;
        double tolerance = Math.Max(0.01 * percent * expected, reference ? 0 : identity.CountToleranceMinimumProtons);
        double hidden = groups.Max(g => judged.MayHide(judged.Fit.Groups[g.Index].RegionPpm));
        bool passes = observed >= expected - tolerance && observed <= expected + tolerance + hidden;
        string excuse = passes && observed > expected + tolerance ? ", with an exchangeable proton that may lie under it" : "";
        string names = string.Join(", ", groups.Select(g => g.Name));
        string verb = groups.Count == 1 ? "integrates" : "together integrate";
        return new Finding(
            CountRule.Id,
            names,
            $"{names} {verb} to {Say.Coarse(observed)} H; expected {Say.Whole(expected)} ± {Say.Coarse(tolerance)} H{excuse}.",
            passes ? Outcome.Pass : Outcome.Flag,
            observed,
            u,
            expected - tolerance,
            expected + tolerance + hidden,
            "H",
            [.. groups.Select(g => judged.Fit.Groups[g.Index].RegionPpm)]);
    }
}
