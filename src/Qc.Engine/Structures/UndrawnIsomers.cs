using System.Collections.Immutable;

namespace Qc.Engine.Structures;

/// <summary>
/// The isomers a structure may mean where it leaves arrangements undrawn, as far as they matter for symmetry.
/// </summary>
/// <remarks>
/// An undrawn centre with four different neighbours that no symmetry of the bare graph moves acts alike in either sense, and is
/// set at will. Centres that have counterparts (2,4-pentanediol: meso or not) or sit in a ring between equal halves (cis or trans)
/// do matter: every combination is listed, up to <see cref="MostFree"/> of them; beyond, the first and those one step from it.
/// Bridgeheads take the only arrangement that small rings allow (<see cref="Bridgeheads"/>).
/// </remarks>
internal static class UndrawnIsomers
{
    /// <summary>Most undrawn arrangements of which all combinations are listed.</summary>
    public const int MostFree = 5;

    /// <summary>Arrangements of each isomer; at least one.</summary>
    public static IEnumerable<ImmutableArray<StereoUnit>> Of(Molecule molecule, SymmetryGraph graph)
    {
        int[] colours = [.. graph.Kinds];
        ImmutableArray<StereoUnit> units = Bridgeheads.Settle(
            molecule, [.. StereoPerception.Units(molecule).Select(unit => unit.IsDrawn ? unit : Canonical(unit, colours))]);
        int[] free = [.. Enumerable.Range(0, units.Length).Where(i => !units[i].IsDrawn && Matters(molecule, units[i], units, colours))];
        // All reversed at once is the mirror image, the same for topicity; so without drawn centres the first may stay.
        bool mirrorIsFree = free.Length > 0 && units.All(unit => !unit.IsDrawn || unit.Shape == StereoShape.Planar)
            && free.All(i => units[i].Shape != StereoShape.Planar);
        int[] turning = mirrorIsFree ? free[1..] : free;
        if (turning.Length > MostFree)
        {
            return [units, .. turning.Select(i => Reversed(units, [i]))];
        }

        return Enumerable.Range(0, 1 << turning.Length)
            .Select(pattern => Reversed(units, turning.Where((_, k) => (pattern >> k & 1) == 1)));
    }

    private static ImmutableArray<StereoUnit> Reversed(ImmutableArray<StereoUnit> units, IEnumerable<int> which)
    {
        ImmutableArray<StereoUnit>.Builder copy = units.ToBuilder();
        foreach (int i in which)
        {
            copy[i] = copy[i] with { Sign = -copy[i].Sign };
        }

        return copy.ToImmutable();
    }

    // Where the bare graph tells the neighbours apart, like units get like senses.
    private static StereoUnit Canonical(StereoUnit unit, int[] colours) =>
        unit.Sense(colours, mirrored: false) < 0 ? unit with { Sign = -unit.Sign } : unit;

    private static bool Matters(Molecule molecule, StereoUnit unit, ImmutableArray<StereoUnit> units, int[] colours)
    {
        // An amide's two rotamers interconvert; they are no isomers to choose from.
        if (unit.Shape == StereoShape.Planar && molecule.BondBetween(unit.Owners[0], unit.Owners[1]) is { Order: 1 })
        {
            return false;
        }

        if (unit.Tied(colours) < 0)
        {
            return units.Any(other => other != unit && other.Shape == unit.Shape
                && other.Owners.Select(owner => colours[owner]).Order().SequenceEqual(unit.Owners.Select(owner => colours[owner]).Order()));
        }

        return unit.Shape == StereoShape.Tetrahedral && IsBetweenEqualHalves(molecule, unit, colours);
    }

    // Exactly two neighbours alike, both along a ring: the other two are up or down.
    private static bool IsBetweenEqualHalves(Molecule molecule, StereoUnit unit, int[] colours)
    {
        IGrouping<int, int>[] alike = [.. unit.Neighbours.Where(n => n >= 0).GroupBy(n => colours[n]).Where(cell => cell.Count() > 1)];
        return alike is [var pair] && pair.Count() == 2
            && molecule.Rings.Any(ring => ring.Contains(unit.Owners[0]) && pair.All(ring.Contains));
    }
}
