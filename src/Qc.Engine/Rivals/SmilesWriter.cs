using System.Globalization;
using System.Text;
using Qc.Engine.Structures;

namespace Qc.Engine.Rivals;

/// <summary>
/// Writes a structure as SMILES (the open specification, OpenSMILES 1.0, from memory), so that people and toolkits can read what
/// the engine made. The same structure gives the same text whatever its numbering, but for the arrangement in space of symmetric ones.
/// </summary>
public static class SmilesWriter
{
    /// <summary>The SMILES of a structure.</summary>
    /// <exception cref="ArgumentException">More than <see cref="StructureForm.MostAtoms"/> heavy atoms.</exception>
    public static string Write(Molecule molecule) => string.Join('.', new SmilesTree(molecule, StructureForm.OrderOf(molecule)).Roots
        .Select(tree => tree.Text()));

    /// <summary>Symbol of an element as SMILES writes it.</summary>
    internal static string Symbol(Atom atom)
    {
        string symbol = AtomicWeights.Find(atom.AtomicNumber)?.Symbol
            ?? throw new ArgumentException($"Element {atom.AtomicNumber} is not in the table of elements.", nameof(atom));
        return atom.IsAromatic ? symbol.ToLowerInvariant() : symbol;
    }

    /// <summary>The atom as written: bare where reading it would give the same hydrogens, else in brackets.</summary>
    /// <param name="molecule">The structure.</param>
    /// <param name="index">The atom.</param>
    /// <param name="turn">"@", "@@" or nothing.</param>
    internal static string AtomText(Molecule molecule, int index, string turn)
    {
        Atom atom = molecule.Atoms[index];
        string symbol = Symbol(atom);
        if (turn.Length == 0 && atom.FormalCharge == 0 && atom.Isotope == 0 && ImpliedHydrogens(molecule, atom) == atom.HydrogenCount)
        {
            return symbol;
        }

        var text = new StringBuilder("[");
        text.Append(atom.Isotope == 0 ? "" : atom.Isotope.ToString(CultureInfo.InvariantCulture)).Append(symbol).Append(turn);
        AppendCounted(text, 'H', atom.HydrogenCount);
        AppendCounted(text, atom.FormalCharge < 0 ? '-' : '+', Math.Abs(atom.FormalCharge));
        return text.Append(']').ToString();
    }

    private static void AppendCounted(StringBuilder text, char sign, int count)
    {
        if (count > 0)
        {
            text.Append(sign);
        }

        if (count > 1)
        {
            text.Append(count.ToString(CultureInfo.InvariantCulture));
        }
    }

    /// <summary>Hydrogens that a bare symbol stands for: up to the next usual valence; -1 where the atom is never bare.</summary>
    private static int ImpliedHydrogens(Molecule molecule, Atom atom)
    {
        if (atom.IsAromatic)
        {
            return atom.AtomicNumber switch
            {
                6 => 3 - molecule.BondsOf(atom.Index).Length,
                7 or 8 or 16 when molecule.BondsOf(atom.Index).Length == 2 || atom.AtomicNumber == 7 => 0,
                _ => -1,
            };
        }

        int[] valences = atom.AtomicNumber switch
        {
            5 => [3],
            6 => [4],
            7 or 15 => [3, 5],
            8 => [2],
            16 => [2, 4, 6],
            9 or 17 or 35 or 53 => [1],
            _ => [],
        };
        int used = molecule.BondsOf(atom.Index).Sum(bond => molecule.Bonds[bond].Order);
        int fitting = Array.Find(valences, valence => valence >= used);
        return fitting == 0 ? -1 : fitting - used;
    }
}
