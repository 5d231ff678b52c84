using System.Collections.Immutable;
using Qc.Engine.Prediction.Environments;
using Qc.Engine.Structures;

namespace Qc.Engine.Prediction;

/// <summary>
/// Expected proton shifts and couplings of a structure, each with a standard uncertainty and the table rows it rests on.
/// The facts are in Data/*.tsv; here is only how they are put together.
/// </summary>
public static class Predictor
{
    /// <summary>Predicts the proton spectrum of a molecule.</summary>
    /// <param name="molecule">The structure.</param>
    /// <param name="protons">Its protons by topicity; groups and sets keep their order.</param>
    /// <param name="solvent">CDCl3, DMSO-d6, acetone-d6, CD3CN, CD3OD, D2O or C6D6; any other name widens the uncertainty.</param>
    /// <returns>One shift for each group, couplings between sets, couplings to 19F and 31P.</returns>
    public static Expectation Predict(Molecule molecule, ProtonGroups protons, string solvent)
    {
        var perceived = new PerceivedMolecule(molecule);
        return new Expectation(
            protons,
            [.. protons.Groups.Select(group => ShiftOf(perceived, group, solvent))],
            CouplingRules.Between(perceived, protons, solvent),
            HeteroCouplingRules.Of(perceived, protons));
    }

    /// <summary>0 or 1: which of two diastereotopic groups on the same atoms this is.</summary>
    internal static int OrdinalOf(ProtonGroup group) =>
        group.DiastereotopicPartner >= 0 && group.DiastereotopicPartner < group.Index ? 1 : 0;

    private static ExpectedShift ShiftOf(PerceivedMolecule molecule, ProtonGroup group, string solvent)
    {
        int atom = group.Atoms[0];
        ShiftEstimate estimate = molecule[atom].AtomicNumber == 6
            ? SolventEffect.Apply(molecule, atom, solvent, OnCarbon(molecule, atom, group))
            : ExchangeableShifts.Estimate(molecule, atom, solvent);
        return new ExpectedShift(
            group.Index,
            estimate.ShiftPpm,
            estimate.StandardUncertaintyPpm,
            estimate.IsCovered ? Basis.Increments : Basis.NotCovered,
            estimate.Rows);
    }

    private static ShiftEstimate OnCarbon(PerceivedMolecule molecule, int carbon, ProtonGroup group)
    {
        if (molecule[carbon].IsAromatic)
        {
            return AromaticShifts.Estimate(molecule, carbon);
        }

        if (molecule.Hybridisation(carbon) < 3)
        {
            return OlefinShifts.Estimate(molecule, carbon, OrdinalOf(group));
        }

        ShiftEstimate estimate = SaturatedShifts.Estimate(molecule, carbon);
        double difference = SaturatedShifts.IsInSubstitutedRing(molecule, carbon) ? UncertaintyModel.DiastereotopicInRingPpm : UncertaintyModel.DiastereotopicPpm;
        return group.DiastereotopicPartner < 0 ? estimate : estimate with
        {
            StandardUncertaintyPpm = Math.Sqrt(
                Math.Pow(estimate.StandardUncertaintyPpm, 2) + Math.Pow(difference, 2)),
        };
    }
}
