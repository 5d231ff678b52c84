using Qc.Engine.Prediction.Environments;

namespace Qc.Engine.Prediction;

/// <summary>What the solvent does to protons on carbon, from Data/solvent-effects.tsv; the other tables are for CDCl3.</summary>
internal static class SolventEffect
{
    private const string BaseSolvent = "CDCl3";
    private const string IonisablePlace = "D2O/ionisable";
    private const string Water = "D2O";
    private static readonly PatternTable Effects = PatternTable.Load("solvent-effects");

    /// <summary>
    /// The estimate in another solvent: class mean added, class spread as further uncertainty. In D2O, protons near an amine, acid
    /// or azine are widened further, since the pH is not known. A solvent without rows only widens.
    /// </summary>
    public static ShiftEstimate Apply(PerceivedMolecule molecule, int carbon, string solvent, ShiftEstimate estimate)
    {
        if (solvent == BaseSolvent || !estimate.IsCovered)
        {
            return estimate;
        }

        estimate = Effects.FirstAt(molecule, carbon, solvent) is { } effect
            ? Add(estimate, effect)
            : Widen(estimate, UncertaintyModel.UnknownSolventPpm);
        return solvent == Water && Effects.FirstAt(molecule, carbon, IonisablePlace) is { } ionisable ? Add(estimate, ionisable) : estimate;
    }

    private static ShiftEstimate Add(ShiftEstimate estimate, Fact effect) => Widen(
        estimate with { ShiftPpm = estimate.ShiftPpm + effect.Value, Rows = estimate.Rows.Add(effect.Id) }, effect.StandardUncertainty);

    private static ShiftEstimate Widen(ShiftEstimate estimate, double standardUncertaintyPpm) => estimate with
    {
        StandardUncertaintyPpm = Math.Sqrt(
            (estimate.StandardUncertaintyPpm * estimate.StandardUncertaintyPpm) + (standardUncertaintyPpm * standardUncertaintyPpm)),
    };
}
