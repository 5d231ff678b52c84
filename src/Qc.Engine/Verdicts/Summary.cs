using System.Collections.Immutable;
using Qc.Engine.Verdicts.Rules;

namespace Qc.Engine.Verdicts;

/// <summary>Says in one or two plain sentences why a lot got its verdict, most important first.</summary>
internal static class Summary
{
    public static string Of(string product, ImmutableArray<Finding> findings, bool unsuitable)
    {
        Finding[] flags = [.. findings.Where(f => f.Outcome == Outcome.Flag)];
        if (flags.Length == 0)
        {
            return $"The spectrum is that of {product}: every criterion passes.";
        }

        if (unsuitable)
        {
            Finding first = flags.First(f => f.Criterion.StartsWith("suitability.", StringComparison.Ordinal));
            return $"This measurement is not fit to be judged; measure again. {first.Statement}";
        }

        Finding? other = flags.FirstOrDefault(f => f.Criterion == SubstanceRule.Id);
        if (other is not null)
        {
            return other.Statement;
        }

        Finding main = flags.OrderBy(Rank).First();
        return flags.Length == 1
            ? main.Statement
            : $"{main.Statement} {flags.Length - 1} more {(flags.Length == 2 ? "finding is" : "findings are")} flagged.";
    }

    private static int Rank(Finding finding) => finding.Criterion switch
    {
        PresenceRule.Id => 0,
        ShiftRule.Id => 1,
        CountRule.Id => 2,
        PatternRule.Id => 3,
        CouplingRule.Id => 4,
        RivalRule.Id => 5,
        UnaccountedRule.Region => 6,
        _ => 7,
    };
}
