using System.Collections.Immutable;
using Qc.Engine.Prediction.Environments;
using Qc.Engine.Structures;

namespace Qc.Engine.Rivals;

/// <summary>Filters about rings that a pattern cannot say.</summary>
internal static class RingStrain
{
    /// <summary>Atoms in all bridges together from which a bridgehead double bond can be (Fawcett's S; 8 from memory).</summary>
    private const int EnoughBridgeAtoms = 8;

    /// <summary>Whether two rings of three or four atoms have an atom in common.</summary>
    public static bool HasJoinedSmallRings(PerceivedMolecule molecule)
    {
        ImmutableArray<int>[] small = [.. molecule.Molecule.Rings.Where(ring => ring.Length <= 4)];
        return Pairs(small).Any(pair => pair.First.Intersect(pair.Second).Any());
    }

    /// <summary>
    /// Whether a double bond of a ring starts at a bridgehead: an end of the way that two rings have in common when that way is
    /// longer than a bond.
    /// </summary>
    public static bool HasBridgeheadDoubleBond(PerceivedMolecule molecule)
    {
        foreach ((ImmutableArray<int> first, ImmutableArray<int> second) in Pairs([.. molecule.Molecule.Rings]))
        {
            int[] shared = [.. first.Intersect(second)];
            int[] all = [.. first.Union(second)];
            if (shared.Length < 3 || all.Length - 2 >= EnoughBridgeAtoms)
            {
                continue;
            }

            foreach (int atom in shared.Where(atom => molecule.Neighbours(atom).Count(all.Contains) == 3))
            {
                if (molecule.Molecule.BondsOf(atom).Any(bond =>
                    (molecule.Molecule.Bonds[bond].Order > 1 || molecule.Molecule.Bonds[bond].IsAromatic) && all.Contains(molecule.Molecule.Other(bond, atom))))
                {
                    return true;
                }
            }
        }

        return false;
    }

    private static IEnumerable<(ImmutableArray<int> First, ImmutableArray<int> Second)> Pairs(ImmutableArray<int>[] rings) =>
        rings.SelectMany((first, i) => rings.Skip(i + 1).Select(second => (first, second)));
}
