using Qc.Engine.Fitting;
using Qc.Engine.Prediction;
using Qc.Engine.Processing;
using Qc.Engine.Structures;

namespace Qc.Engine.Verdicts;

/// <summary>One spectrum with all that the rules need to judge it.</summary>
internal sealed record JudgedSpectrum
{
    public required string Name { get; init; }

    public required CheckRequest Request { get; init; }

    public required ProcessingOutcome Processing { get; init; }

    public required Expectation Expectation { get; init; }

    public required FitResult Fit { get; init; }

    public Criteria Criteria => Request.Criteria;

    public Spectrum Spectrum => Processing.Spectrum;

    /// <summary>Relaxation delay plus acquisition time in seconds, where the file states both.</summary>
    public double? RepetitionTimeSeconds => Processing.RelaxationDelaySeconds + Processing.AcquisitionTimeSeconds;

    /// <summary>Protons of the product that the window shows and that do not exchange.</summary>
    public double ExpectedProtons => Expectation.Protons.Groups
        .Where(g => IsAsserted(g))
        .Sum(g => (double)g.Count);

    /// <summary>Whether a group may be asserted: it does not exchange and lies in the window.</summary>
    public bool IsAsserted(ProtonGroup group) =>
        group.Lability == Lability.Fixed && Fit.Groups[group.Index].Measured;

    /// <summary>Shift tolerance of a group in ppm.</summary>
    public double ShiftTolerancePpm(int group)
    {
        IdentityCriteria identity = Criteria.Identity;
        ExpectedShift shift = Expectation.Shifts[group];
        return shift.Basis == Basis.Reference
            ? identity.ShiftToleranceReferencePpm
            : Math.Clamp(
                identity.ShiftToleranceStandardUncertainties * shift.StandardUncertaintyPpm,
                identity.ShiftToleranceMinimumPpm,
                identity.ShiftToleranceMaximumPpm);
    }

    /// <summary>Whether the product is judged against a reference lot.</summary>
    public bool HasReference => Expectation.Shifts.Any(s => s.Basis == Basis.Reference);
}
