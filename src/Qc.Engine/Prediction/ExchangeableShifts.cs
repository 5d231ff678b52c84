using Qc.Engine.Prediction.Environments;

namespace Qc.Engine.Prediction;

/// <summary>Protons on heteroatoms: the middle of the usual range and a wide uncertainty, never to be asserted.</summary>
internal static class ExchangeableShifts
{
    private const double CentreOfClassPpm = 5.0;
    private static readonly PatternTable Ranges = PatternTable.Load("exchangeable");

    /// <summary>Estimates the shift of protons on a heteroatom in a solvent.</summary>
    public static ShiftEstimate Estimate(PerceivedMolecule molecule, int atom, string solvent) =>
        (Ranges.FirstAt(molecule, atom, solvent) ?? Ranges.FirstAt(molecule, atom)) is { } range
            ? new ShiftSum(range).ToEstimate()
            : ShiftEstimate.NotCovered(CentreOfClassPpm, UncertaintyModel.ExchangeableClassPpm);
}
