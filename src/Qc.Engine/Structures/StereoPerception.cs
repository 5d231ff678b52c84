using System.Collections.Immutable;

namespace Qc.Engine.Structures;

/// <summary>
/// Finds the arrangements in space that hold on the NMR time scale at room temperature.
/// Held: four-bonded C, Si, Ge, B and N+; S and P with three or four neighbours; double bonds outside small rings;
/// the C-N bond of amides and thioamides and the N-N bond of nitrosamines; allenes.
/// Not held: amines (they invert), single bonds (they turn), rings (they flip: planar on average), C=N-H.
/// Carbamates, ureas, amidines and hindered biaryls are taken as turning; that is common practice, and solvent and
/// temperature can prove it wrong.
/// </summary>
internal static class StereoPerception
{
    // A trans double bond closes no ring smaller than this.
    private const int SmallestTransRing = 8;

    /// <summary>All arrangements but those of CH2 hydrogens, which need one of the two to be asked about.</summary>
    public static ImmutableArray<StereoUnit> Units(Molecule molecule) =>
    [
        .. molecule.Atoms.Where(atom => IsTetrahedral(molecule, atom) && atom.HydrogenCount < 2).Select(atom => Centre(molecule, atom)),
        .. HeldBonds(molecule).Select(held => FromBond(molecule, held)).OfType<StereoUnit>(),
    ];

    /// <summary>
    /// The arrangement that tells the two hydrogens of an atom apart, the one of <paramref name="side"/> (0 or 1) being asked about;
    /// null where nothing holds them apart.
    /// On a carbon chain or ring: seen from the lower-numbered neighbour, the other, hydrogen 0 and hydrogen 1 turn clockwise.
    /// On =CH2 and CONH2: hydrogen 0 is on the side of the lowest-numbered neighbour at the other end.
    /// </summary>
    public static StereoUnit? HydrogenPair(Molecule molecule, int atom, int side)
    {
        Atom centre = molecule.Atoms[atom];
        if (centre.HydrogenCount != 2)
        {
            return null;
        }

        int[] heavy = [.. molecule.NeighboursOf(atom).Order()];
        int sign = side == 0 ? 1 : -1;
        if (IsTetrahedral(molecule, centre) && heavy.Length == 2)
        {
            return new StereoUnit(
                StereoShape.Tetrahedral, [atom], [heavy[0], heavy[1], StereoUnit.Asked, StereoUnit.NotAsked], sign, IsDrawn: true);
        }

        foreach (HeldBond held in HeldBonds(molecule))
        {
            if (held.A != atom && held.B != atom)
            {
                continue;
            }

            int far = held.A == atom ? held.B : held.A;
            ImmutableArray<int> other = SidesOf(molecule, held, far);
            return other.IsEmpty
                ? null
                : new StereoUnit(held.Shape, [atom, far], [StereoUnit.Asked, StereoUnit.NotAsked, .. other], sign, IsDrawn: true);
        }

        return null;
    }

    private sealed record HeldBond(int A, int B, StereoShape Shape, int InnerOfA, int InnerOfB, Bond? Drawn);

    private static bool IsTetrahedral(Molecule molecule, Atom atom)
    {
        int neighbours = molecule.BondsOf(atom.Index).Length + atom.HydrogenCount;
        bool saturated = molecule.BondsOf(atom.Index).All(bond => molecule.Bonds[bond] is { Order: 1, IsAromatic: false });
        return atom.AtomicNumber switch
        {
            5 or 6 or 7 or 14 or 32 => neighbours == 4 && saturated,
            15 or 16 or 34 => neighbours is 3 or 4 && !atom.IsAromatic
                && molecule.BondsOf(atom.Index).Length >= 3 - Math.Min(1, atom.HydrogenCount),
            _ => false,
        };
    }

    private static StereoUnit Centre(Molecule molecule, Atom atom)
    {
        int[] heavy = [.. molecule.NeighboursOf(atom.Index).Order()];
        ImmutableArray<int> neighbours = heavy.Length switch
        {
            4 => [.. heavy],
            3 => [StereoUnit.Implicit, .. heavy],
            _ => [StereoUnit.Implicit, .. heavy, StereoUnit.NotAsked],
        };
        return new StereoUnit(
            StereoShape.Tetrahedral, [atom.Index], neighbours, atom.Winding == Winding.Counterclockwise ? -1 : 1, atom.Winding != Winding.None);
    }

    private static StereoUnit? FromBond(Molecule molecule, HeldBond held)
    {
        ImmutableArray<int> a = SidesOf(molecule, held, held.A);
        ImmutableArray<int> b = SidesOf(molecule, held, held.B);
        if (a.IsEmpty || b.IsEmpty)
        {
            return null;
        }

        int sign = 1;
        if (held.Drawn is { } drawn)
        {
            bool samePair = (a[0] == drawn.SideOfA) == (b[0] == drawn.SideOfB);
            sign = samePair == drawn.SidesAreCis ? 1 : -1;
        }

        return new StereoUnit(held.Shape, [held.A, held.B], [.. a, .. b], sign, held.Drawn is not null);
    }

    // The two sides of an end: heavy neighbours, lowest first, filled up with the hydrogen or lone pair. Empty where the sides
    // are not told apart: two hydrogens, or nothing at all.
    private static ImmutableArray<int> SidesOf(Molecule molecule, HeldBond held, int end)
    {
        int inner = end == held.A ? held.InnerOfA : held.InnerOfB;
        int[] heavy = [.. molecule.NeighboursOf(end).Where(atom => atom != inner).Order()];
        return heavy.Length switch
        {
            1 => [heavy[0], StereoUnit.Implicit],
            2 => [heavy[0], heavy[1]],
            _ => [],
        };
    }

    private static IEnumerable<HeldBond> HeldBonds(Molecule molecule)
    {
        for (int b = 0; b < molecule.Bonds.Length; b++)
        {
            Bond bond = molecule.Bonds[b];
            if (bond.Order == 2 && !bond.IsAromatic)
            {
                if (Cumulated(molecule, bond) is { } held)
                {
                    yield return held;
                }
            }
            else if (bond.Order == 1 && SmallestRing(molecule, bond.A, bond.B) == 0)
            {
                if (IsSlowToTurn(molecule, bond.A, bond.B) || IsSlowToTurn(molecule, bond.B, bond.A))
                {
                    yield return new HeldBond(bond.A, bond.B, StereoShape.Planar, bond.B, bond.A, null);
                }
            }
        }
    }

    // Follows a run of double bonds to its ends; reported once, by the bond at the lower end. An odd run is planar, an even one crossed.
    private static HeldBond? Cumulated(Molecule molecule, Bond bond)
    {
        if (SmallestRing(molecule, bond.A, bond.B) is > 0 and < SmallestTransRing)
        {
            return null;
        }

        (int endA, int innerA, int stepsA) = Walk(molecule, bond.B, bond.A);
        (int endB, int innerB, int stepsB) = Walk(molecule, bond.A, bond.B);
        int low = Math.Min(endA, endB);
        bool speaks = bond.A == low || bond.B == low;
        if (!speaks || !IsPlanarEnd(molecule, endA) || !IsPlanarEnd(molecule, endB))
        {
            return null;
        }

        int steps = stepsA + stepsB;
        bool drawn = steps == 0 && bond.SideOfA >= 0 && bond.SideOfB >= 0;
        return new HeldBond(
            endA, endB, steps % 2 == 0 ? StereoShape.Planar : StereoShape.Axial, innerA, innerB, drawn ? bond : null);
    }

    private static (int End, int Inner, int Steps) Walk(Molecule molecule, int from, int to)
    {
        int steps = 0;
        while (molecule.Atoms[to] is { AtomicNumber: 6, HydrogenCount: 0 } && molecule.BondsOf(to).Length == 2
            && steps < molecule.Atoms.Length)
        {
            int next = molecule.NeighboursOf(to).First(atom => atom != from);
            if (molecule.BondBetween(to, next) is not { Order: 2 })
            {
                break;
            }

            (from, to) = (to, next);
            steps++;
        }

        return (to, from, steps);
    }

    // Carbon with two further neighbours, or nitrogen with one and its lone pair. C=N-H turns over too fast to count.
    private static bool IsPlanarEnd(Molecule molecule, int atom)
    {
        Atom end = molecule.Atoms[atom];
        int others = molecule.BondsOf(atom).Length - 1 + end.HydrogenCount;
        return end.AtomicNumber switch
        {
            6 or 14 or 32 => others == 2,
            7 => (others == 1 && end.HydrogenCount == 0) || (others == 2 && end.FormalCharge == 1),
            _ => false,
        };
    }

    // Nitrogen of an amide (one carbonyl carbon that bears H or C besides), or of a nitrosamine.
    private static bool IsSlowToTurn(Molecule molecule, int nitrogen, int acyl)
    {
        Atom n = molecule.Atoms[nitrogen];
        if (n is not { AtomicNumber: 7, FormalCharge: 0, IsAromatic: false } || molecule.BondsOf(nitrogen).Length + n.HydrogenCount != 3
            || molecule.BondsOf(nitrogen).Any(bond => molecule.Bonds[bond].Order != 1))
        {
            return false;
        }

        return IsCarbonyl(molecule, acyl, nitrogen)
            ? molecule.NeighboursOf(nitrogen).Count(atom => IsCarbonyl(molecule, atom, nitrogen)) == 1
            : molecule.Atoms[acyl].AtomicNumber == 7 && molecule.BondsOf(acyl).Length == 2
                && molecule.NeighboursOf(acyl).Any(atom => molecule.Atoms[atom].AtomicNumber == 8 && molecule.BondBetween(acyl, atom)!.Order == 2);
    }

    private static bool IsCarbonyl(Molecule molecule, int carbon, int nitrogen) =>
        molecule.Atoms[carbon] is { AtomicNumber: 6, IsAromatic: false }
        && molecule.NeighboursOf(carbon).Any(atom =>
            molecule.Atoms[atom].AtomicNumber is 8 or 16 && molecule.BondBetween(carbon, atom)!.Order == 2)
        && molecule.NeighboursOf(carbon).Where(atom => atom != nitrogen && molecule.BondBetween(carbon, atom)!.Order == 1)
            .All(atom => molecule.Atoms[atom].AtomicNumber == 6);

    private static int SmallestRing(Molecule molecule, int a, int b) =>
        molecule.Rings.Where(ring => ring.Contains(a) && ring.Contains(b)).Select(ring => ring.Length).DefaultIfEmpty(0).Min();
}
