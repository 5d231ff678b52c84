using System.Collections.Immutable;
using Qc.Engine.Fitting;
using Qc.Engine.Prediction;
using Qc.Engine.Structures;

namespace Qc.Engine.Verdicts;

/// <summary>Writes the proton ledger: every group expected, and what was found of it.</summary>
internal static class Ledger
{
    private const double SmallestSplittingHertz = 1.0;

    /// <summary>Below this ratio of shift difference to coupling a pattern is called "m": it is not first order.</summary>
    private const double FirstOrderRatio = 6;

    private static readonly string[] Names = ["s", "d", "t", "q", "quint", "sext", "sept", "oct", "non"];

    public static ImmutableArray<LedgerLine> Of(JudgedSpectrum judged) =>
        [.. judged.Expectation.Protons.Groups.Select(g => Line(judged, g))];

    private static LedgerLine Line(JudgedSpectrum judged, ProtonGroup group)
    {
        GroupFit fit = judged.Fit.Groups[group.Index];
        ExpectedShift expected = judged.Expectation.Shifts[group.Index];
        bool exchangeable = group.Lability == Lability.Exchangeable;
        (string splitting, ImmutableArray<double> couplings) = fit.Found ? Splitting(judged, group) : ("", []);
        return new LedgerLine
        {
            Group = group.Name,
            Atoms = [.. group.Atoms.Select(a => a + 1)],
            ExpectedCount = group.Count,
            ObservedCount = fit.Found ? fit.Protons : exchangeable || !fit.Measured ? null : 0,
            ExpectedPpm = expected.ShiftPpm,
            ExpectedStandardUncertaintyPpm = expected.StandardUncertaintyPpm,
            ObservedPpm = fit.Found ? fit.ShiftPpm : null,
            RegionPpm = fit.Found ? fit.RegionPpm : null,
            Splitting = exchangeable && fit.Found ? "br" : splitting,
            CouplingsHz = exchangeable ? [] : couplings,
            Basis = expected.Basis,
            Exchangeable = exchangeable,
            Remark = Remark(exchangeable, fit, expected),
        };
    }

    private static string Remark(bool exchangeable, GroupFit fit, ExpectedShift expected) =>
        !fit.Measured ? "not measured: outside the window"
        : exchangeable && fit.Found ? "exchanges: not asserted"
        : exchangeable ? "exchanges: not seen, not asserted"
        : !fit.Found ? "no signal found"
        : expected.Basis == Basis.NotCovered ? "the tables do not cover this environment"
        : !fit.Alone ? "overlaps another group"
        : "";

    /// <summary>The trade's short form from the fitted couplings; anything of second order is "m".</summary>
    private static (string Splitting, ImmutableArray<double> CouplingsHz) Splitting(JudgedSpectrum judged, ProtonGroup group)
    {
        var fitted = judged.Fit.Couplings.ToDictionary(c => c.Parameter, c => c.Hertz);
        ProtonSet set = judged.Expectation.Protons.Sets.First(s => s.Group == group.Index);
        var neighbours = new List<(double Hertz, int Count)>();
        bool firstOrder = true;
        foreach (ExpectedCoupling coupling in judged.Expectation.Couplings.Where(c => c.SetA == set.Index || c.SetB == set.Index))
        {
            ProtonSet other = judged.Expectation.Protons.Sets[coupling.SetA == set.Index ? coupling.SetB : coupling.SetA];
            ProtonGroup otherGroup = judged.Expectation.Protons.Groups[other.Group];
            double hertz = Math.Abs(fitted.GetValueOrDefault(coupling.Parameter, coupling.Hertz));
            if (otherGroup.Lability == Lability.Exchangeable || hertz < SmallestSplittingHertz)
            {
                continue;
            }

            if (other.Group == group.Index)
            {
                firstOrder = false;
                continue;
            }

            GroupFit otherFit = judged.Fit.Groups[other.Group];
            double place = otherFit.Found ? otherFit.ShiftPpm : judged.Expectation.Shifts[other.Group].ShiftPpm;
            double apart = Math.Abs(place - judged.Fit.Groups[group.Index].ShiftPpm) * judged.Spectrum.FrequencyMHz;
            firstOrder &= apart > FirstOrderRatio * hertz;
            neighbours.Add((hertz, other.Count));
        }

        foreach (ExpectedHeteroCoupling coupling in judged.Expectation.HeteroCouplings.Where(c => c.Set == set.Index))
        {
            double hertz = Math.Abs(fitted.GetValueOrDefault(coupling.Parameter, coupling.Hertz));
            if (hertz >= SmallestSplittingHertz)
            {
                neighbours.Add((hertz, coupling.Atoms.Length));
            }
        }

        List<(double Hertz, int Count)> merged = Merge(neighbours);
        ImmutableArray<double> couplings = [.. merged.Select(m => m.Hertz)];
        if (!firstOrder || merged.Count > 3 || merged.Any(m => m.Count >= Names.Length))
        {
            return ("m", couplings);
        }

        return (merged.Count == 0 ? "s" : string.Concat(merged.Select(m => Names[m.Count])), couplings);
    }

    /// <summary>Couplings within half a hertz split as one.</summary>
    private static List<(double Hertz, int Count)> Merge(List<(double Hertz, int Count)> neighbours)
    {
        var merged = new List<(double Hertz, int Count)>();
        foreach ((double hertz, int count) in neighbours.OrderByDescending(n => n.Hertz))
        {
            if (merged.Count > 0 && merged[^1].Hertz - hertz < 0.5)
            {
                (double known, int before) = merged[^1];
                merged[^1] = (((known * before) + (hertz * count)) / (before + count), before + count);
            }
            else
            {
                merged.Add((hertz, count));
            }
        }

        return merged;
    }
}
