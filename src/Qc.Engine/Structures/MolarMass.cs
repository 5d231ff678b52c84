using Qc.Engine.Values;

namespace Qc.Engine.Structures;

/// <summary>Molar mass with the uncertainty of the standard atomic weights.</summary>
public static class MolarMass
{
    /// <summary>
    /// Molar mass in g/mol of the whole structure, salts and solvates included. Atoms of one element err together, elements apart.
    /// The mass of electrons lost or gained (0.0005 g/mol for a charge) is left out.
    /// </summary>
    /// <exception cref="ArgumentException">The table has no weight for an element or isotope; ask <see cref="IsKnown"/> first.</exception>
    public static Uncertain Of(Molecule molecule)
    {
        double mass = 0;
        double variance = 0;
        foreach (FormulaPart part in MolecularFormula.Of(molecule).Parts)
        {
            Uncertain weight = AtomicWeights.Find(part.AtomicNumber, part.Isotope)?.Weight
                ?? throw new ArgumentException($"No atomic weight for element {part.AtomicNumber}, isotope {part.Isotope}.", nameof(molecule));
            mass += part.Count * weight.Value;
            variance += Math.Pow(part.Count * weight.StandardUncertainty, 2);
        }

        return new Uncertain(mass, Math.Sqrt(variance));
    }

    /// <summary>Whether the table has a weight for every atom.</summary>
    public static bool IsKnown(Molecule molecule) =>
        molecule.Atoms.All(atom => AtomicWeights.Find(atom.AtomicNumber, atom.Isotope) is not null);
}
