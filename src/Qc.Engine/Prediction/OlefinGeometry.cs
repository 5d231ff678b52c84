using System.Collections.Immutable;
using Qc.Engine.Prediction.Environments;
using Qc.Engine.Structures;

namespace Qc.Engine.Prediction;

/// <summary>
/// Who is cis to whom about a C=C bond. The graph does not tell the two protons of a =CH2 apart, so a convention does:
/// the first of them (ordinal 0) is cis to the substituent with the lowest index on the other carbon.
/// </summary>
internal static class OlefinGeometry
{
    private const int LargestRingWithoutTransBond = 7;

    /// <summary>The carbon at the other end of the non-aromatic double bond of an atom, or -1.</summary>
    public static int PartnerOf(PerceivedMolecule molecule, int atom) =>
        molecule.Molecule.BondsOf(atom)
            .Where(bond => molecule.Molecule.Bonds[bond] is { Order: 2, IsAromatic: false })
            .Select(bond => molecule.Molecule.Other(bond, atom))
            .Where(other => molecule[other].AtomicNumber == 6)
            .DefaultIfEmpty(-1)
            .First();

    /// <summary>Heavy substituents of one end of a double bond, by index.</summary>
    public static ImmutableArray<int> SubstituentsOf(PerceivedMolecule molecule, int atom, int partner) =>
        [.. molecule.Neighbours(atom).Where(other => other != partner).Order()];

    /// <summary>Whether a proton on <paramref name="carbon"/> is cis to a substituent of its double-bond partner; null where the geometry is not stated.</summary>
    public static bool? ProtonIsCisTo(PerceivedMolecule molecule, int carbon, int ordinal, int partner, int substituent)
    {
        ImmutableArray<int> own = SubstituentsOf(molecule, carbon, partner);
        if (own.IsEmpty)
        {
            return (substituent == SubstituentsOf(molecule, partner, carbon)[0]) == (ordinal == 0);
        }

        return !AreCis(molecule, carbon, own[0], partner, substituent);
    }

    /// <summary>Whether the protons on the two ends are cis; null where the geometry is not stated or both ends are CH2.</summary>
    public static bool? ProtonsAreCis(PerceivedMolecule molecule, int carbon, int ordinal, int partner, int partnerOrdinal)
    {
        ImmutableArray<int> far = SubstituentsOf(molecule, partner, carbon);
        if (!far.IsEmpty)
        {
            return !ProtonIsCisTo(molecule, carbon, ordinal, partner, far[0]);
        }

        ImmutableArray<int> near = SubstituentsOf(molecule, carbon, partner);
        return near.IsEmpty ? null : !ProtonIsCisTo(molecule, partner, partnerOrdinal, carbon, near[0]);
    }

    private static bool? AreCis(PerceivedMolecule molecule, int a, int substituentOfA, int b, int substituentOfB)
    {
        Bond bond = molecule.BondBetween(a, b);
        if (bond.SideOfA >= 0 && bond.SideOfB >= 0)
        {
            (int sideOfA, int sideOfB) = bond.A == a ? (bond.SideOfA, bond.SideOfB) : (bond.SideOfB, bond.SideOfA);
            return ((substituentOfA == sideOfA) == (substituentOfB == sideOfB)) == bond.SidesAreCis;
        }

        foreach (int ring in molecule.RingsOf(a).Intersect(molecule.RingsOf(b)))
        {
            ImmutableArray<int> atoms = molecule.Ring(ring);
            if (atoms.Length <= LargestRingWithoutTransBond)
            {
                return atoms.Contains(substituentOfA) == atoms.Contains(substituentOfB);
            }
        }

        return null;
    }
}
