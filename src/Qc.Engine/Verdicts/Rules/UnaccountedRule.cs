using System.Collections.Immutable;

namespace Qc.Engine.Verdicts.Rules;

/// <summary>
/// identity.unaccounted: signal that nothing in the model accounts for stays below its limit, region by region and in
/// all. Unit: protons left over in percent of the product's measured protons, which is mol % for a substance with as
/// many protons. One region of a size that an exchangeable proton which was not found elsewhere would have is set down to
/// that proton, and said to be.
/// </summary>
internal static class UnaccountedRule
{
    public const string Region = "identity.unaccounted";
    public const string Total = "identity.unaccountedTotal";

    /// <summary>Share of an exchangeable proton's count that a region must hold to be set down to it: less is too easily an impurity, more is something else.</summary>
    private const double LeastShare = 0.3;
    private const double LargestShare = 1.3;

    public static IEnumerable<Finding> Judge(JudgedSpectrum judged, ImmutableArray<LeftOver> leftOver)
    {
        IdentityCriteria identity = judged.Criteria.Identity;
        double regionLimit = judged.HasReference ? identity.UnaccountedRegionReferenceMolPercent : identity.UnaccountedRegionMolPercent;
        double totalLimit = judged.HasReference ? identity.UnaccountedTotalReferenceMolPercent : identity.UnaccountedTotalMolPercent;
        if (Exchangeable(judged, leftOver, regionLimit) is { } excused)
        {
            leftOver = leftOver.Remove(excused);
            var place = new Values.Interval(excused.FromPpm, excused.ToPpm);
            yield return new Finding(
                Region,
                Say.Region(place),
                $"Signal of {Say.Coarse(excused.Protons)} H at {Say.Region(place)} is set down to an exchangeable proton, which was not found elsewhere; it is not judged.",
                Outcome.Pass,
                excused.MolPercent,
                null,
                null,
                null,
                "mol %",
                [place]);
        }

        foreach (LeftOver region in leftOver.Where(l => l.MolPercent > regionLimit))
        {
            var interval = new Values.Interval(region.FromPpm, region.ToPpm);
            string known = region.Candidates.IsEmpty
                ? "no known solvent or impurity has a signal there"
                : $"known there: {string.Join(", ", region.Candidates)}";
            yield return new Finding(
                Region,
                Say.Region(interval),
                $"Signal of {Say.Tenth(region.MolPercent)} mol % proton equivalents at {Say.Region(interval)} is not accounted for; {known}.",
                Outcome.Flag,
                region.MolPercent,
                null,
                null,
                regionLimit,
                "mol %",
                [interval]);
        }

        double total = leftOver.Sum(l => l.MolPercent);
        yield return new Finding(
            Total,
            judged.Name,
            $"Signal not accounted for amounts to {Say.Tenth(total)} mol % proton equivalents in all; at most {Say.Tenth(totalLimit)} is allowed.",
            total <= totalLimit ? Outcome.Pass : Outcome.Flag,
            total,
            null,
            null,
            totalLimit,
            "mol %",
            [.. leftOver.Select(l => new Values.Interval(l.FromPpm, l.ToPpm))]);
    }

    private static LeftOver? Exchangeable(JudgedSpectrum judged, ImmutableArray<LeftOver> leftOver, double regionLimit) =>
        leftOver.FirstOrDefault(region =>
        {
            double hidden = judged.MayHide(new Values.Interval(region.FromPpm, region.ToPpm));
            return region.MolPercent > regionLimit && region.Protons >= LeastShare * hidden && region.Protons <= LargestShare * hidden;
        });
}
