using System.Collections.Immutable;

namespace Qc.Engine.Structures;

/// <summary>Handedness of a stereocentre as CIP descriptor, or none.</summary>
public enum Handedness
{
    /// <summary>Not a stereocentre, or not specified.</summary>
    None,

    /// <summary>R.</summary>
    R,

    /// <summary>S.</summary>
    S,
}

/// <summary>
/// Sense in which an atom's neighbours turn: seen from its hydrogen or lone pair where it has one, else from its heavy
/// neighbour of lowest index, the other three in ascending index. Unlike R and S it needs no ranking of substituents.
/// </summary>
public enum Winding
{
    /// <summary>Not drawn.</summary>
    None,

    /// <summary>Clockwise.</summary>
    Clockwise,

    /// <summary>Counterclockwise.</summary>
    Counterclockwise,
}

/// <summary>Geometry of a double bond.</summary>
public enum DoubleBondGeometry
{
    /// <summary>Not stereogenic, or not specified.</summary>
    None,

    /// <summary>E.</summary>
    E,

    /// <summary>Z.</summary>
    Z,
}

/// <summary>An atom. Hydrogens are counted on the atom that bears them, unless deuterium or bonded to no heavy atom.</summary>
/// <param name="Index">Position in <see cref="Molecule.Atoms"/>, from 0. People see Index + 1.</param>
/// <param name="AtomicNumber">Atomic number.</param>
/// <param name="FormalCharge">Charge in units of e.</param>
/// <param name="HydrogenCount">Number of hydrogens (1H) on the atom.</param>
/// <param name="IsAromatic">Whether the atom is in an aromatic ring (toolkit's model).</param>
/// <param name="Isotope">Mass number where one is stated, else 0.</param>
/// <param name="Handedness">CIP descriptor where specified.</param>
/// <param name="Winding">Sense of the neighbours where drawn; also where no CIP descriptor exists (cis and trans on rings).</param>
public sealed record Atom(
    int Index,
    int AtomicNumber,
    int FormalCharge,
    int HydrogenCount,
    bool IsAromatic,
    int Isotope = 0,
    Handedness Handedness = Handedness.None,
    Winding Winding = Winding.None);

/// <summary>A bond, Kekulé order beside the aromatic mark.</summary>
/// <param name="A">Index of one atom.</param>
/// <param name="B">Index of the other.</param>
/// <param name="Order">Kekulé order: 1, 2 or 3.</param>
/// <param name="IsAromatic">Whether the bond is aromatic.</param>
/// <param name="Geometry">E or Z where specified.</param>
/// <param name="SideOfA">For a specified double bond: the neighbour of A that <see cref="SideOfB"/> is cis (Z-like) to when <see cref="SidesAreCis"/>; else -1.</param>
/// <param name="SideOfB">For a specified double bond: a neighbour of B; else -1.</param>
/// <param name="SidesAreCis">Whether SideOfA and SideOfB lie on the same side.</param>
public sealed record Bond(
    int A,
    int B,
    int Order,
    bool IsAromatic,
    DoubleBondGeometry Geometry = DoubleBondGeometry.None,
    int SideOfA = -1,
    int SideOfB = -1,
    bool SidesAreCis = false);

/// <summary>
/// A structure as an immutable graph of heavy atoms; may have several components (salts, solvates).
/// Built by a toolkit outside the engine from SMILES or a molfile, or by the engine's own generator.
/// </summary>
public sealed class Molecule
{
    private readonly ImmutableArray<ImmutableArray<int>> _bondsOf;

    /// <summary>Builds the graph.</summary>
    /// <exception cref="ArgumentException">A bond names an atom that does not exist.</exception>
    public Molecule(ImmutableArray<Atom> atoms, ImmutableArray<Bond> bonds, ImmutableArray<ImmutableArray<int>> rings)
    {
        Atoms = atoms;
        Bonds = bonds;
        Rings = rings;
        var bondsOf = new List<int>[atoms.Length];
        for (int i = 0; i < atoms.Length; i++)
        {
            bondsOf[i] = [];
        }

        for (int b = 0; b < bonds.Length; b++)
        {
            if ((uint)bonds[b].A >= (uint)atoms.Length || (uint)bonds[b].B >= (uint)atoms.Length)
            {
                throw new ArgumentException($"Bond {b} joins atoms {bonds[b].A} and {bonds[b].B}, of {atoms.Length}.", nameof(bonds));
            }

            bondsOf[bonds[b].A].Add(b);
            bondsOf[bonds[b].B].Add(b);
        }

        _bondsOf = [.. bondsOf.Select(list => list.ToImmutableArray())];
    }

    /// <summary>Atoms by index.</summary>
    public ImmutableArray<Atom> Atoms { get; }

    /// <summary>Bonds by index.</summary>
    public ImmutableArray<Bond> Bonds { get; }

    /// <summary>Smallest set of smallest rings: atom indices in ring order.</summary>
    public ImmutableArray<ImmutableArray<int>> Rings { get; }

    /// <summary>Indices of the bonds of an atom.</summary>
    public ImmutableArray<int> BondsOf(int atom) => _bondsOf[atom];

    /// <summary>The atom at the other end of a bond.</summary>
    public int Other(int bond, int atom) => Bonds[bond].A == atom ? Bonds[bond].B : Bonds[bond].A;

    /// <summary>Heavy neighbours of an atom.</summary>
    public IEnumerable<int> NeighboursOf(int atom) => _bondsOf[atom].Select(bond => Other(bond, atom));

    /// <summary>The bond between two atoms, or null.</summary>
    public Bond? BondBetween(int a, int b) =>
        _bondsOf[a].Select(bond => Bonds[bond]).FirstOrDefault(bond => bond.A == b || bond.B == b);
}
