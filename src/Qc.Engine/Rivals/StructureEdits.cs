using System.Collections.Immutable;
using Qc.Engine.Structures;

namespace Qc.Engine.Rivals;

/// <summary>
/// Small changes of a structure that keep its formula: the ways in which a wrong substance is usually like the right one.
/// Edited structures state no arrangement in space.
/// </summary>
internal static class StructureEdits
{
    /// <summary>Smallest ring that is left when a CH2 is taken out of one.</summary>
    private const int SmallestRingLeft = 5;

    /// <summary>All single edits, always in the same order; repeats and impossible structures are not sorted out.</summary>
    public static IEnumerable<Molecule> All(Molecule molecule)
    {
        var graph = new EditGraph(molecule);
        return graph.Swaps().Concat(graph.Moves()).Concat(graph.Methylenes(SmallestRingLeft)).Concat(graph.DoubleBondShifts());
    }

    /// <summary>The structure with one stated double bond or one centre with a CIP descriptor turned; some may be mirror images or repeats.</summary>
    public static IEnumerable<Molecule> Turned(Molecule molecule)
    {
        for (int b = 0; b < molecule.Bonds.Length; b++)
        {
            Bond bond = molecule.Bonds[b];
            if (bond.SideOfA >= 0 && bond.SideOfB >= 0)
            {
                DoubleBondGeometry other = bond.Geometry switch
                {
                    DoubleBondGeometry.E => DoubleBondGeometry.Z,
                    DoubleBondGeometry.Z => DoubleBondGeometry.E,
                    _ => DoubleBondGeometry.None,
                };
                yield return new Molecule(
                    molecule.Atoms, molecule.Bonds.SetItem(b, bond with { Geometry = other, SidesAreCis = !bond.SidesAreCis }), molecule.Rings);
            }
        }

        foreach (Atom atom in molecule.Atoms.Where(atom => atom.Handedness != Handedness.None && atom.Winding != Winding.None))
        {
            yield return WithTurned(molecule, atom);
        }
    }

    /// <summary>
    /// The structure with one centre turned that is drawn but has no CIP descriptor, as on rings: cis and trans. Of equivalent
    /// centres only the first; none where it is the only arrangement drawn, for that would be no other substance.
    /// </summary>
    public static IEnumerable<Molecule> TurnedOnRings(Molecule molecule)
    {
        Atom[] drawn = [.. molecule.Atoms.Where(atom => atom.Winding != Winding.None)];
        Atom[] open = [.. drawn.Where(atom => atom.Handedness == Handedness.None)];
        if (drawn.Length < 2 || open.Length == 0)
        {
            return [];
        }

        int[] equivalent = StructureForm.EquivalentOf(molecule);
        return open.DistinctBy(atom => equivalent[atom.Index]).Select(atom => WithTurned(molecule, atom));
    }

    private static Molecule WithTurned(Molecule molecule, Atom atom)
    {
        Atom turned = atom with
        {
            Winding = atom.Winding == Winding.Clockwise ? Winding.Counterclockwise : Winding.Clockwise,
            Handedness = atom.Handedness switch
            {
                Handedness.R => Handedness.S,
                Handedness.S => Handedness.R,
                _ => Handedness.None,
            },
        };
        return new Molecule(molecule.Atoms.SetItem(atom.Index, turned), molecule.Bonds, molecule.Rings);
    }
}
