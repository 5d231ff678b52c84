using System.Collections.Immutable;
using Qc.Engine.Fitting;
using Qc.Engine.Prediction;
using Qc.Engine.Structures;

namespace Qc.Engine.Verdicts;

/// <summary>A shift as fitted, on the referenced axis.</summary>
/// <param name="Group">Name of the proton group.</param>
/// <param name="ShiftPpm">Shift.</param>
/// <param name="StandardUncertaintyPpm">Standard uncertainty from the fit.</param>
public sealed record FittedShift(string Group, double ShiftPpm, double StandardUncertaintyPpm);

/// <summary>A coupling as fitted and determined by the spectrum.</summary>
/// <param name="GroupA">One group.</param>
/// <param name="GroupB">The other.</param>
/// <param name="Parameter">Number of the constant in the expectation.</param>
/// <param name="Hertz">Coupling with sign.</param>
/// <param name="StandardUncertaintyHertz">Standard uncertainty from the fit.</param>
public sealed record FittedCoupling(string GroupA, string GroupB, int Parameter, double Hertz, double StandardUncertaintyHertz);

/// <summary>Shifts and couplings of a fit: what does not depend on the field and can serve as reference.</summary>
/// <param name="Solvent">Solvent of the spectrum.</param>
/// <param name="Shifts">Groups that were found.</param>
/// <param name="Couplings">Couplings that the spectrum determines.</param>
public sealed record FittedConstants(string Solvent, ImmutableArray<FittedShift> Shifts, ImmutableArray<FittedCoupling> Couplings)
{
    /// <summary>The constants of a judged spectrum. Shifts of exchangeable protons depend on concentration, water and temperature and are left out.</summary>
    internal static FittedConstants Of(JudgedSpectrum judged)
    {
        Expectation expectation = judged.Expectation;
        string Name(int set) => expectation.Protons.Groups[expectation.Protons.Sets[set].Group].Name;
        return new FittedConstants(
            judged.Spectrum.RecognisedSolvent ?? judged.Request.Solvent,
            [
                .. expectation.Protons.Groups
                    .Where(g => judged.IsAsserted(g) && judged.Fit.Groups[g.Index].Found)
                    .Select(g => judged.Fit.Groups[g.Index])
                    .Select(f => new FittedShift(expectation.Protons.Groups[f.Group].Name, f.ShiftPpm - judged.OffsetPpm, f.ShiftStandardUncertaintyPpm)),
            ],
            [
                .. judged.Fit.Couplings
                    .Where(c => c.Determined)
                    .Select(c => (Fit: c, Expected: expectation.Couplings.FirstOrDefault(e => e.Parameter == c.Parameter)))
                    .Where(c => c.Expected is not null)
                    .Select(c => new FittedCoupling(
                        Name(c.Expected!.SetA), Name(c.Expected.SetB), c.Fit.Parameter, c.Fit.Hertz, c.Fit.StandardUncertaintyHertz)),
            ]);
    }
}

/// <summary>The reference lot of a product: later lots are expected to look like it.</summary>
/// <param name="Name">The lot's number, for sentences.</param>
/// <param name="Constants">Its fitted constants.</param>
public sealed record ReferenceLot(string Name, FittedConstants Constants)
{
    /// <summary>
    /// Standard uncertainty of a shift from lot to lot on a referenced axis (concentration and temperature; a starting value
    /// of ours, a third of the shift tolerance), and on an axis without reference.
    /// </summary>
    private const double LotToLotPpm = 0.01;
    private const double WithoutAxisPpm = 0.05;

    /// <summary>Standard uncertainty of a coupling from lot to lot: couplings hardly depend on anything (a starting value of ours).</summary>
    private const double LotToLotHertz = 0.15;

    /// <summary>
    /// The expectation with the reference's shifts and couplings where it has them. A spectrum in another solvent keeps the
    /// prediction: shifts do not carry over.
    /// </summary>
    internal Expectation Apply(Expectation predicted, string solvent, bool axisIsReferenced)
    {
        if (Constants.Solvent != solvent)
        {
            return predicted;
        }

        var shifts = Constants.Shifts.ToDictionary(s => s.Group, StringComparer.Ordinal);
        var couplings = Constants.Couplings.ToDictionary(c => c.Parameter);
        string Name(int set) => predicted.Protons.Groups[predicted.Protons.Sets[set].Group].Name;
        double spread = axisIsReferenced ? LotToLotPpm : WithoutAxisPpm;
        return predicted with
        {
            Shifts =
            [
                .. predicted.Shifts.Select(s =>
                    shifts.TryGetValue(predicted.Protons.Groups[s.Group].Name, out FittedShift? known)
                        && predicted.Protons.Groups[s.Group].Lability == Lability.Fixed
                        ? s with
                        {
                            ShiftPpm = known.ShiftPpm,
                            StandardUncertaintyPpm = Math.Sqrt((spread * spread) + (known.StandardUncertaintyPpm * known.StandardUncertaintyPpm)),
                            Basis = Basis.Reference,
                            Rows = [$"lot {this.Name}"],
                        }
                        : s),
            ],
            Couplings =
            [
                .. predicted.Couplings.Select(c =>
                    couplings.TryGetValue(c.Parameter, out FittedCoupling? known)
                        && known.GroupA == Name(c.SetA) && known.GroupB == Name(c.SetB)
                        ? c with
                        {
                            Hertz = known.Hertz,
                            StandardUncertaintyHertz = Math.Sqrt(
                                (LotToLotHertz * LotToLotHertz) + (known.StandardUncertaintyHertz * known.StandardUncertaintyHertz)),
                            Row = $"lot {this.Name}",
                        }
                        : c),
            ],
        };
    }
}
