using System.Collections.Immutable;

namespace Qc.Engine.Prediction;

/// <summary>An estimate of a shift before the solvent is considered (CDCl3).</summary>
/// <param name="ShiftPpm">The estimate.</param>
/// <param name="StandardUncertaintyPpm">Its standard uncertainty.</param>
/// <param name="Rows">Ids of the rows it rests on.</param>
/// <param name="IsCovered">False where the tables do not cover the environment.</param>
internal sealed record ShiftEstimate(double ShiftPpm, double StandardUncertaintyPpm, ImmutableArray<string> Rows, bool IsCovered = true)
{
    /// <summary>The estimate where the tables say nothing: centre and width of the whole class.</summary>
    public static ShiftEstimate NotCovered(double shiftPpm, double standardUncertaintyPpm) => new(shiftPpm, standardUncertaintyPpm, [], false);

    /// <summary>
    /// One estimate from several that rest on related data: mean weighted by precision. Estimates much less certain than the best
    /// are left out. As they share data, the variance is that of the best, plus the spread between them.
    /// </summary>
    public static ShiftEstimate Combine(ImmutableArray<ShiftEstimate> estimates)
    {
        double best = estimates.Min(estimate => estimate.StandardUncertaintyPpm);
        ImmutableArray<ShiftEstimate> used =
            [.. estimates.Where(estimate => estimate.StandardUncertaintyPpm <= UncertaintyModel.WorstToBestRatio * best)];
        double weights = used.Sum(Precision);
        double mean = used.Sum(estimate => Precision(estimate) * estimate.ShiftPpm) / weights;
        double spread = used.Sum(estimate => Precision(estimate) * Math.Pow(estimate.ShiftPpm - mean, 2)) / weights;
        return new ShiftEstimate(mean, Math.Sqrt((best * best) + spread), [.. used.SelectMany(estimate => estimate.Rows)]);
    }

    private static double Precision(ShiftEstimate estimate) => 1 / (estimate.StandardUncertaintyPpm * estimate.StandardUncertaintyPpm);
}
