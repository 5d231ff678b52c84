using System.Collections.Immutable;
using System.Globalization;

namespace Qc.Engine.Verdicts.Rules;

/// <summary>identity.rivals: the spectrum tells the expected structure from every rival that was put to the test.</summary>
internal static class RivalRule
{
    public const string Id = "identity.rivals";

    public static IEnumerable<Finding> Judge(Criteria criteria, string product, RivalTest test)
    {
        double limit = criteria.Identity.RivalLogEvidenceRatio;
        foreach (RivalResult rival in test.Results.Where(r => !r.IsGenerated || (r.IsFitted && !r.ToldApart)))
        {
            string name = rival.IsGenerated ? $"its isomer {rival.Smiles}" : rival.Name;
            yield return Finding(
                criteria,
                rival.Name,
                rival.ToldApart
                    ? $"The spectrum tells {product} from {name}: log10 evidence ratio {Say.Tenth(rival.LogEvidenceRatio)}."
                    : $"The spectrum does not tell {product} from {name}: log10 evidence ratio {Say.Tenth(rival.LogEvidenceRatio)}, needed {Say.Tenth(limit)}.",
                rival.ToldApart,
                rival.LogEvidenceRatio);
        }

        if (test.Unresolved is [var closest, ..])
        {
            yield return Finding(
                criteria,
                "generated isomers",
                $"{Count(test.Unresolved.Length, "more isomer")} of {product} fit the signals too nearly to be ruled out by predicted shifts and were not fitted; the closest is {closest.Smiles}.",
                false,
                closest.LogEvidenceRatio);
        }

        ImmutableArray<RivalResult> generated = [.. test.Results.Where(r => r.IsGenerated)];
        if (test.Unresolved.IsEmpty && !generated.IsEmpty && generated.All(r => r.ToldApart))
        {
            RivalResult nearest = generated.First(r => r.IsFitted);
            yield return Finding(
                criteria,
                "generated isomers",
                $"The spectrum tells {product} from {(test.IsComplete ? "all" : "the")} {Count(test.Generated, "isomer")} {(test.IsComplete ? "that a plant could meet" : "nearest to it")}; "
                    + $"the closest is {nearest.Smiles}, log10 evidence ratio {Say.Tenth(nearest.LogEvidenceRatio)}.",
                true,
                nearest.LogEvidenceRatio);
        }
    }

    private static Finding Finding(Criteria criteria, string subject, string statement, bool isToldApart, double ratio) => new(
        Id,
        subject,
        statement,
        isToldApart || !criteria.Identity.RivalsMustBeToldApart ? Outcome.Pass : Outcome.Flag,
        ratio,
        null,
        criteria.Identity.RivalLogEvidenceRatio,
        null,
        "log10");

    private static string Count(int count, string noun) =>
        string.Create(CultureInfo.InvariantCulture, $"{count} {noun}{(count == 1 ? "" : "s")}");
}
