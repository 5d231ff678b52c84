using System.Collections.Immutable;

namespace Qc.Engine.Verdicts.Rules;

/// <summary>identity.rivals: the spectrum tells the expected structure from every rival that was put to the test.</summary>
internal static class RivalRule
{
    public const string Id = "identity.rivals";

    public static IEnumerable<Finding> Judge(Criteria criteria, string product, ImmutableArray<RivalResult> rivals)
    {
        double limit = criteria.Identity.RivalLogEvidenceRatio;
        foreach (RivalResult rival in rivals)
        {
            bool passes = rival.ToldApart || !criteria.Identity.RivalsMustBeToldApart;
            yield return new Finding(
                Id,
                rival.Name,
                rival.ToldApart
                    ? $"The spectrum tells {product} from {rival.Name}: log10 evidence ratio {Say.Tenth(rival.LogEvidenceRatio)}."
                    : $"The spectrum does not tell {product} from {rival.Name}: log10 evidence ratio {Say.Tenth(rival.LogEvidenceRatio)}, needed {Say.Tenth(limit)}.",
                passes ? Outcome.Pass : Outcome.Flag,
                rival.LogEvidenceRatio,
                null,
                limit,
                null,
                "log10");
        }
    }
}
