using System.Collections.Immutable;
using Qc.Engine.Fitting;
using Qc.Engine.Prediction;
using Qc.Engine.Processing;
using Qc.Engine.Structures;

namespace Qc.Engine.Rivals;

/// <summary>A rival as the screen sees it.</summary>
/// <param name="Candidate">The rival.</param>
/// <param name="Log10Ratio">
/// Estimated log10 evidence of the expected structure over it, from places, counts and widths alone. Small or negative: only a
/// full fit can tell.
/// </param>
public sealed record ScreenedRival(RivalCandidate Candidate, double Log10Ratio);

/// <summary>
/// Ranks rivals by how well their predicted proton groups can be laid on what was measured, against how well those of the expected
/// structure can. Quick and coarse: it says which rivals deserve a full fit.
/// </summary>
/// <remarks>
/// What was measured is the multiplets that the fit of the expected structure found, where they describe the spectrum: they come
/// apart even where they overlap. Where the fit leaves something out, it is the signals as they are.
/// The misfit of a structure is that of <see cref="GroupAssignment"/> (half the sum of squared deviations of shift, area and width
/// in standard uncertainties, each capped) plus ln of each shift's standard uncertainty over its floor: a prediction so vague that
/// anything fits explains nothing. The same is done for the expected structure, with <see cref="CoarseGroups"/> for both, so common
/// faults cancel.
/// </remarks>
internal static class RivalScreen
{
    private const int BeamWidth = 40;
    private const double FloorPpm = 0.04;

    /// <summary>The rivals by rising ratio; of equals the nearer relation first.</summary>
    /// <param name="structure">The expected structure.</param>
    /// <param name="input">As it was fitted.</param>
    /// <param name="fit">That fit; its area per proton sets the scale.</param>
    /// <param name="solvent">The solvent for which to predict.</param>
    /// <param name="candidates">The rivals.</param>
    /// <param name="cancellation">Gives up.</param>
    public static ImmutableArray<ScreenedRival> Rank(
        Molecule structure, FitInput input, FitResult fit, string solvent, IReadOnlyList<RivalCandidate> candidates, CancellationToken cancellation)
    {
        AssignableSignal[] offered = FittedMultiplets.Of(input, fit) ?? Signals(input);
        double MisfitOf(Molecule molecule) =>
            Misfit(input, offered, fit.AreaPerProton, Predictor.Predict(molecule, CoarseGroups.Of(molecule), solvent));
        double expected = MisfitOf(structure);
        var ranked = new List<ScreenedRival>(candidates.Count);
        foreach (RivalCandidate candidate in candidates)
        {
            cancellation.ThrowIfCancellationRequested();
            ranked.Add(new ScreenedRival(candidate, (MisfitOf(candidate.Structure) - expected) / Math.Log(10)));
        }

        return [.. ranked.OrderBy(rival => rival.Log10Ratio).ThenBy(rival => rival.Candidate.Origin)];
    }

    private static AssignableSignal[] Signals(FitInput input)
    {
        ImmutableArray<MeasuredSignal> signals = MeasuredSignals.Find(input.Spectrum, SpectrumFit.GapHertz(input.Product));
        var claims = ForeignClaims.Of(input, signals);
        return [.. signals.Select((signal, s) => claims.Offer(signal, s)).Where((_, s) => !claims.IsWholly(s))];
    }

    private static double Misfit(FitInput input, AssignableSignal[] signals, double areaPerProton, Expectation expectation)
    {
        List<AssignableGroup> groups = StartingPlaces.Assignable(expectation, input.Spectrum.WindowPpm);
        if (groups.Count == 0)
        {
            return double.PositiveInfinity;
        }

        double fromTotal = signals.Where(signal => signal.UnassignedCost >= GroupAssignment.LargestUnassignedCost).Sum(signal => signal.Area) / groups.Sum(group => group.Count);
        double best = new[] { areaPerProton, fromTotal }
            .Select(scale => GroupAssignment.BestAt(groups, signals, scale, BeamWidth)?.Cost ?? double.PositiveInfinity)
            .Min();
        return best + groups.Sum(group => Math.Log(Math.Max(FloorPpm, group.StandardUncertaintyPpm) / FloorPpm));
    }
}
