using System.Collections.Immutable;

namespace Qc.Engine.Tests.Prediction;

/// <summary>
/// Lays predicted groups on measured signals: every group in one signal, every signal filled to its proton count; of all
/// such ways the one with the smallest sum of deviations. Exhaustive, as the molecules are small.
/// </summary>
public static class Assignment
{
    /// <summary>For each group the index of its signal, or null where the counts cannot be matched.</summary>
    public static ImmutableArray<int>? Of(ImmutableArray<(double ShiftPpm, int Protons)> groups, ImmutableArray<MeasuredSignal> signals)
    {
        var free = signals.Select(signal => signal.Protons).ToArray();
        var trial = new int[groups.Length];
        ImmutableArray<int>? best = null;
        double bestCost = double.PositiveInfinity;

        void Place(int group, double cost)
        {
            if (cost >= bestCost)
            {
                return;
            }

            if (group == groups.Length)
            {
                if (free.All(left => left == 0))
                {
                    (bestCost, best) = (cost, [.. trial]);
                }

                return;
            }

            for (int signal = 0; signal < free.Length; signal++)
            {
                if (free[signal] >= groups[group].Protons)
                {
                    free[signal] -= groups[group].Protons;
                    trial[group] = signal;
                    Place(group + 1, cost + Math.Abs(groups[group].ShiftPpm - signals[signal].ShiftPpm));
                    free[signal] += groups[group].Protons;
                }
            }
        }

        Place(0, 0);
        return best;
    }
}
