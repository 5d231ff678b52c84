using Qc.Engine.Fitting;
using Qc.Engine.Prediction;
using Qc.Engine.Processing;
using Qc.Engine.Structures;
using Qc.Engine.Values;

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

    /// <summary>
    /// Common offset of the product's groups from their expected shifts, where the axis has no reference: the mean weighted
    /// by 1/(u² + 0.05²). Null with fewer than two groups, or where it is not clear of its own uncertainty.
    /// </summary>
    public Uncertain? CommonOffsetPpm
    {
        get
        {
            if (Spectrum.AxisCorrectionPpm is not null)
            {
                return null;
            }

            double weights = 0;
            double sum = 0;
            int groups = 0;
            foreach (ProtonGroup group in Expectation.Protons.Groups.Where(g => IsAsserted(g) && Fit.Groups[g.Index].Found))
            {
                ExpectedShift expected = Expectation.Shifts[group.Index];
                double weight = 1 / ((expected.StandardUncertaintyPpm * expected.StandardUncertaintyPpm) + 0.0025);
                weights += weight;
                sum += weight * (Fit.Groups[group.Index].ShiftPpm - expected.ShiftPpm);
                groups++;
            }

            return groups < 2 ? null : new Uncertain(sum / weights, Math.Sqrt(1 / weights));
        }
    }

    /// <summary>What is taken off observed shifts before they are judged: the common offset, where it is clear (2 u) and below 0.3 ppm.</summary>
    public double OffsetPpm =>
        CommonOffsetPpm is { } offset && Math.Abs(offset.Value) > 2 * offset.StandardUncertainty && Math.Abs(offset.Value) < 0.3 ? offset.Value : 0;

    /// <summary>Relaxation delay plus acquisition time in seconds, where the file states both.</summary>
    public double? RepetitionTimeSeconds => Processing.RelaxationDelaySeconds + Processing.AcquisitionTimeSeconds;

    /// <summary>
    /// Exchangeable protons that were not found by themselves and may lie in a region: their place is known to two standard
    /// uncertainties, at least a ppm. They may be exchanged away as well, so they excuse signal but never stand in for any.
    /// </summary>
    public double MayHide(Interval regionPpm) => Expectation.Protons.Groups
        .Where(g => g.Lability == Lability.Exchangeable && !Fit.Groups[g.Index].Found)
        .Where(g =>
        {
            ExpectedShift shift = Expectation.Shifts[g.Index];
            double reach = Math.Max(1, 2 * shift.StandardUncertaintyPpm);
            return regionPpm.High > shift.ShiftPpm - reach && regionPpm.Low < shift.ShiftPpm + reach;
        })
        .Sum(g => (double)g.Count);

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
