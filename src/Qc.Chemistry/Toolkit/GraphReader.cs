using System.Collections.Immutable;
using Qc.Engine.Structures;

namespace Qc.Chemistry.Toolkit;

/// <summary>Turns the toolkit's graph into the engine's.</summary>
internal static class GraphReader
{
    /// <summary>Builds the molecule.</summary>
    /// <param name="graph">Atoms, bonds, rings and aromaticity.</param>
    /// <param name="stereo">CIP descriptors, by atom index of <paramref name="graph"/>.</param>
    public static Molecule Build(ToolkitGraph graph, ToolkitStereo stereo)
    {
        ToolkitExtension? marks = graph.Extensions.FirstOrDefault(extension => extension.Name == "rdkitRepresentation");
        HashSet<int> aromaticAtoms = [.. marks?.AromaticAtoms ?? []];
        HashSet<int> aromaticBonds = [.. marks?.AromaticBonds ?? []];
        Dictionary<int, Handedness> handedness = stereo.Atoms.ToDictionary(
            entry => entry[0].GetInt32(),
            entry => HandednessOf(entry[1].GetString()));
        Dictionary<(int, int), DoubleBondGeometry> geometry = stereo.Bonds.ToDictionary(
            entry => Ends(entry[0].GetInt32(), entry[1].GetInt32()),
            entry => GeometryOf(entry[2].GetString()));

        return new Molecule(
            [.. graph.Atoms.Select((atom, i) => new Atom(
                i, atom.Z, atom.Chg, atom.ImpHs, aromaticAtoms.Contains(i), atom.Isotope,
                handedness.GetValueOrDefault(i), WindingOf(graph, i)))],
            [.. graph.Bonds.Select((bond, i) => BondOf(bond, aromaticBonds.Contains(i), geometry))],
            [.. (marks?.AtomRings ?? []).Select(ring => ring.ToImmutableArray())]);
    }

    private static Bond BondOf(ToolkitBond bond, bool isAromatic, Dictionary<(int, int), DoubleBondGeometry> geometry)
    {
        int a = bond.Atoms[0];
        int b = bond.Atoms[1];
        if (bond.StereoAtoms is not [int sideOfA, int sideOfB] || bond.Stereo is not ("cis" or "trans"))
        {
            return new Bond(a, b, bond.Bo, isAromatic);
        }

        return new Bond(
            a, b, bond.Bo, isAromatic, geometry.GetValueOrDefault(Ends(a, b)), sideOfA, sideOfB, bond.Stereo == "cis");
    }

    // The toolkit states the turn of the neighbours in bond order, seen from the first, a hydrogen or lone pair coming last.
    // With four neighbours sorting them is all there is to do; with three, (n1; n2 n3 H) is the mirror image of (H; n1 n2 n3).
    private static Winding WindingOf(ToolkitGraph graph, int atom)
    {
        if (graph.Atoms[atom].Stereo is not ("cw" or "ccw"))
        {
            return Winding.None;
        }

        int[] neighbours = [.. graph.Bonds.Where(bond => bond.Atoms.Contains(atom))
            .Select(bond => bond.Atoms[0] == atom ? bond.Atoms[1] : bond.Atoms[0])];
        int inversions = neighbours.SelectMany((first, i) => neighbours.Skip(i + 1).Where(later => later < first)).Count();
        bool clockwise = graph.Atoms[atom].Stereo == "cw";
        clockwise ^= inversions % 2 == 1;
        clockwise ^= neighbours.Length == 3;
        return clockwise ? Winding.Clockwise : Winding.Counterclockwise;
    }

    private static (int Low, int High) Ends(int a, int b) => (Math.Min(a, b), Math.Max(a, b));

    // Lower case r and s (pseudoasymmetric centres) are equal to their mirror image as a whole, and are kept all the same:
    // they tell one meso diastereomer from another.
    private static Handedness HandednessOf(string? tag) => tag switch
    {
        "(R)" or "(r)" => Handedness.R,
        "(S)" or "(s)" => Handedness.S,
        _ => Handedness.None,
    };

    private static DoubleBondGeometry GeometryOf(string? tag) => tag switch
    {
        "(E)" or "(e)" => DoubleBondGeometry.E,
        "(Z)" or "(z)" => DoubleBondGeometry.Z,
        _ => DoubleBondGeometry.None,
    };
}
