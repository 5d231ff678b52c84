using System.Globalization;
using Qc.Engine.Structures;

namespace Qc.Engine.Rivals;

/// <summary>
/// A text that is equal for two structures if and only if they are the same substance to an achiral measurement: constitution,
/// charges and isotopes, double-bond geometry, and CIP descriptors up to mirror image
/// (centres that have none, as cis and trans on rings, are not told apart). Kekulé forms of an aromatic ring are one.
/// </summary>
public static class StructureForm
{
    /// <summary>Most heavy atoms of a structure that has a form.</summary>
    public const int MostAtoms = LabelledGraph.MostVertices;

    /// <summary>The form.</summary>
    /// <exception cref="ArgumentException">More than <see cref="MostAtoms"/> heavy atoms.</exception>
    public static string Of(Molecule molecule)
    {
        string form = Text(Label(molecule, mirrored: false).Code);
        if (molecule.Atoms.All(atom => atom.Handedness == Handedness.None))
        {
            return form;
        }

        string mirrored = Text(Label(molecule, mirrored: true).Code);
        return string.CompareOrdinal(form, mirrored) <= 0 ? form : mirrored;
    }

    /// <summary>
    /// A text that is equal also for tautomers that differ only in which nitrogen, oxygen or sulfur bears a hydrogen, and for any
    /// arrangement in space: skeleton and hydrogens on other atoms only. Among isomers, such tautomers are one substance.
    /// </summary>
    /// <exception cref="ArgumentException">More than <see cref="MostAtoms"/> heavy atoms.</exception>
    public static string SkeletonOf(Molecule molecule)
    {
        bool IsMobile(Atom atom) => atom.AtomicNumber is 7 or 8 or 16;
        return Text(Label(new Molecule(
            [.. molecule.Atoms.Select(atom => new Atom(atom.Index, atom.AtomicNumber, 0, IsMobile(atom) ? 0 : atom.HydrogenCount, false, atom.Isotope))],
            [.. molecule.Bonds.Select(bond => new Bond(bond.A, bond.B, 1, false))],
            molecule.Rings), mirrored: false).Code);
    }

    /// <summary>Canonical order of the atoms.</summary>
    internal static int[] OrderOf(Molecule molecule) => [.. Label(molecule, mirrored: false).Order];

    /// <summary>Of each atom the first that a symmetry of the constitution makes it equivalent to.</summary>
    internal static int[] EquivalentOf(Molecule molecule) => Label(molecule, mirrored: false).OrbitOfEach();

    private static GraphLabelling Label(Molecule molecule, bool mirrored)
    {
        if (molecule.Atoms.Length > MostAtoms)
        {
            throw new ArgumentException($"{molecule.Atoms.Length} heavy atoms; at most {MostAtoms} can be ordered.", nameof(molecule));
        }

        var graph = new LabelledGraph();
        foreach (Atom atom in molecule.Atoms)
        {
            graph.AddVertex(Kind(atom, mirrored));
        }

        foreach (Bond bond in molecule.Bonds)
        {
            graph.Join(bond.A, bond.B, EdgeOf(bond));
        }

        var labelling = new GraphLabelling();
        labelling.Label(graph);
        return labelling;
    }

    private static int Kind(Atom atom, bool mirrored)
    {
        int hand = (atom.Handedness, mirrored) switch
        {
            (Handedness.None, _) => 0,
            (Handedness.R, false) or (Handedness.S, true) => 1,
            _ => 2,
        };
        return (((((((atom.AtomicNumber * 8) + atom.HydrogenCount) * 16) + atom.FormalCharge + 8) * 512) + atom.Isotope) * 3) + hand;
    }

    private static int EdgeOf(Bond bond) => bond switch
    {
        { IsAromatic: true } => 4,
        { Geometry: DoubleBondGeometry.E } => 5,
        { Geometry: DoubleBondGeometry.Z } => 6,
        _ => bond.Order,
    };

    private static string Text(int[] code) => string.Join(',', code.Select(number => number.ToString(CultureInfo.InvariantCulture)));
}
