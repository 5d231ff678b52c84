using System.Collections.Immutable;

namespace Qc.Engine.Tests.Prediction;

/// <summary>
/// Lays predicted groups on measured signals: every group in one signal, every signal filled to its proton count; of all
/// such ways the one with the smallest sum of costs. Exhaustive, as the molecules are small.
/// </summary>
public static class Assignment
{
    /// <summary>For each group the index of its signal, or null where the counts cannot be matched.</summary>
    /// <param name="groups">Protons of each group.</param>
    /// <param name="signals">Protons of each signal.</param>
    /// <param name="cost">Cost of laying a group on a signal.</param>
    public static ImmutableArray<int>? Of(ImmutableArray<int> groups, ImmutableArray<int> signals, Func<int, int, double> cost)
    {
        var free = signals.ToArray();
        double[][] costs = [.. groups.Select((_, group) => signals.Select((_, signal) => cost(group, signal)).ToArray())];
        var trial = new int[groups.Length];
        ImmutableArray<int>? best = null;
        double bestCost = double.PositiveInfinity;

        void Place(int group, double spent)
        {
            if (spent >= bestCost)
            {
                return;
            }

            if (group == groups.Length)
            {
                if (free.All(left => left == 0))
                {
                    (bestCost, best) = (spent, [.. trial]);
                }

                return;
            }

            for (int signal = 0; signal < free.Length; signal++)
            {
                if (free[signal] >= groups[group])
                {
                    free[signal] -= groups[group];
                    trial[group] = signal;
                    Place(group + 1, spent + costs[group][signal]);
                    free[signal] += groups[group];
                }
            }
        }

        Place(0, 0);
        return best;
    }
}
