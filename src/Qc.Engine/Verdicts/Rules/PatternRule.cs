using System.Globalization;
using Qc.Engine.Fitting;
using Qc.Engine.Prediction;
using Qc.Engine.Structures;

namespace Qc.Engine.Verdicts.Rules;

/// <summary>
/// identity.pattern: the splitting simulated for a group draws what was measured. Judged for groups that stand alone and
/// whose couplings are surely predicted; elsewhere the statement says that only shift and integral were judged.
/// The limit is a starting value of ours, not of any standard.
/// </summary>
internal static class PatternRule
{
    public const string Id = "identity.pattern";

    /// <summary>Largest share of a group's signal that its simulated pattern may leave undrawn.</summary>
    public const double LargestMisfit = 0.4;

    private const double SureCouplingHertz = 1.2;

    public static IEnumerable<Finding> Judge(JudgedSpectrum judged)
    {
        foreach (ProtonGroup group in judged.Expectation.Protons.Groups.Where(judged.IsAsserted))
        {
            GroupFit fit = judged.Fit.Groups[group.Index];
            if (!fit.Found || !fit.Alone)
            {
                continue;
            }

            bool draws = fit.PatternMisfit <= LargestMisfit;
            bool sure = CouplingsAreSure(judged.Expectation, group);
            string share = (100 * fit.PatternMisfit).ToString("0", CultureInfo.InvariantCulture);
            string statement = draws
                ? $"The simulated pattern of {group.Name} draws the measured one but for {share} %."
                : sure
                    ? $"The simulated pattern of {group.Name} does not draw the measured one: {share} % is left undrawn."
                    : $"The pattern of {group.Name} is not predicted surely enough to be judged; its shift and integral were.";
            yield return new Finding(
                Id,
                group.Name,
                statement,
                draws || !sure ? Outcome.Pass : Outcome.Flag,
                100 * fit.PatternMisfit,
                null,
                null,
                draws || sure ? 100 * LargestMisfit : null,
                "%",
                [fit.RegionPpm]);
        }
    }

    private static bool CouplingsAreSure(Expectation expectation, ProtonGroup group)
    {
        int[] sets = [.. expectation.Protons.Sets.Where(s => s.Group == group.Index).Select(s => s.Index)];
        return expectation.Couplings
            .Where(c => sets.Contains(c.SetA) || sets.Contains(c.SetB))
            .All(c => c.StandardUncertaintyHertz <= SureCouplingHertz)
            && expectation.HeteroCouplings
                .Where(c => sets.Contains(c.Set))
                .All(c => c.StandardUncertaintyHertz <= 2 * SureCouplingHertz);
    }
}
