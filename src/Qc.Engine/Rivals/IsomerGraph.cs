using System.Collections.Immutable;
using Qc.Engine.Structures;

namespace Qc.Engine.Rivals;

/// <summary>A bond of an <see cref="IsomerGraph"/>.</summary>
/// <param name="A">The earlier atom.</param>
/// <param name="B">The later atom.</param>
/// <param name="Order">1, 2 or 3.</param>
internal readonly record struct IsomerBond(byte A, byte B, byte Order);

/// <summary>
/// A constitution as the generator makes it: heavy atoms by kind and bonds with Kekulé orders; hydrogens fill the valences.
/// Immutable and small: about a hundred bytes.
/// </summary>
public sealed class IsomerGraph
{
    internal IsomerGraph(IsomerFormula formula, byte[] kinds, IsomerBond[] bonds)
    {
        Formula = formula;
        Kinds = kinds;
        Bonds = bonds;
    }

    /// <summary>The formula it is an isomer of (or, within the generator, part of an isomer of).</summary>
    public IsomerFormula Formula { get; }

    /// <summary>Index into the formula's heavy atoms, by atom.</summary>
    internal byte[] Kinds { get; }

    /// <summary>Bonds in the order in which they were made: by later atom.</summary>
    internal IsomerBond[] Bonds { get; }

    /// <summary>Number of rings.</summary>
    public int RingCount => Bonds.Length - Kinds.Length + 1;

    /// <summary>The structure, with rings and aromatic marks as the structure toolkit would set them; no arrangement in space is drawn.</summary>
    public Molecule ToMolecule()
    {
        var free = new int[Kinds.Length];
        for (int i = 0; i < free.Length; i++)
        {
            free[i] = Formula.Heavy[Kinds[i]].Valence;
        }

        foreach (IsomerBond bond in Bonds)
        {
            free[bond.A] -= bond.Order;
            free[bond.B] -= bond.Order;
        }

        return Perception.Complete(
            [.. Kinds.Select((kind, i) => new Atom(i, Formula.Heavy[kind].AtomicNumber, 0, free[i], false))],
            [.. Bonds.Select(bond => new Bond(bond.A, bond.B, bond.Order, false))]);
    }
}
