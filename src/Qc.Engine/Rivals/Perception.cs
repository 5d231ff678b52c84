using System.Collections.Immutable;
using Qc.Engine.Structures;

namespace Qc.Engine.Rivals;

/// <summary>
/// Completes a structure made inside the engine: rings, and the aromatic marks that the structure toolkit would set.
/// </summary>
/// <remarks>
/// Aromatic model as the toolkit documents it: every atom of the ring, or of up to three fused rings, gives 0, 1 or 2 electrons,
/// and 4n + 2 make it aromatic. An atom in a multiple bond gives one, unless the bond leaves the rings towards a more
/// electronegative atom (C=O: none); otherwise a lone pair gives two. Of fused rings taken together the outline is aromatic.
/// That both agree is tested structure by structure.
/// </remarks>
public static class Perception
{
    private const int MostFused = 3;

    /// <summary>The molecule with rings and aromatic marks; marks on the atoms and bonds given are not looked at.</summary>
    public static Molecule Complete(ImmutableArray<Atom> atoms, ImmutableArray<Bond> bonds)
    {
        ImmutableArray<ImmutableArray<int>> rings = SmallestRings.Of(atoms.Length, [.. bonds.Select(bond => (bond.A, bond.B))]);
        (bool[] aromaticAtoms, bool[] aromaticBonds) = Aromatic(atoms, bonds, rings);
        return new Molecule(
            [.. atoms.Select((atom, i) => atom with { IsAromatic = aromaticAtoms[i] })],
            [.. bonds.Select((bond, b) => bond with { IsAromatic = aromaticBonds[b] })],
            rings);
    }

    /// <summary>Which atoms and bonds are aromatic.</summary>
    private static (bool[] Atoms, bool[] Bonds) Aromatic(
        ImmutableArray<Atom> atoms, ImmutableArray<Bond> bonds, ImmutableArray<ImmutableArray<int>> rings)
    {
        var aromaticAtoms = new bool[atoms.Length];
        var aromaticBonds = new bool[bonds.Length];
        if (rings.IsEmpty)
        {
            return (aromaticAtoms, aromaticBonds);
        }

        int[][] bondsOf = [.. rings.Select(ring => BondsOf(bonds, ring))];
        HashSet<int> ringBonds = [.. bondsOf.SelectMany(ring => ring)];
        int?[] electrons = [.. atoms.Select(atom => Electrons(atoms, bonds, ringBonds, atom.Index))];
        int[] candidates = [.. Enumerable.Range(0, rings.Length).Where(r => rings[r].All(atom => electrons[atom] is not null))];
        for (int size = 1; size <= MostFused; size++)
        {
            foreach (int[] fused in Fused(candidates, bondsOf, size))
            {
                int[] outline = [.. fused.SelectMany(r => bondsOf[r]).GroupBy(bond => bond).Where(group => group.Count() == 1).Select(group => group.Key)];
                int[] members = [.. fused.SelectMany(r => rings[r]).GroupBy(atom => atom).Where(group => group.Count() <= 2).Select(group => group.Key)];
                if (members.Sum(atom => electrons[atom]!.Value) % 4 != 2 || outline.All(bond => aromaticBonds[bond]))
                {
                    continue;
                }

                foreach (int bond in outline)
                {
                    aromaticBonds[bond] = true;
                    aromaticAtoms[bonds[bond].A] = true;
                    aromaticAtoms[bonds[bond].B] = true;
                }
            }
        }

        return (aromaticAtoms, aromaticBonds);
    }

    private static int[] BondsOf(ImmutableArray<Bond> bonds, ImmutableArray<int> ring) =>
        [.. Enumerable.Range(0, bonds.Length).Where(b => AreNext(ring, bonds[b].A, bonds[b].B))];

    private static bool AreNext(ImmutableArray<int> ring, int a, int b)
    {
        int at = ring.IndexOf(a);
        return at >= 0 && (ring[(at + 1) % ring.Length] == b || ring[(at + ring.Length - 1) % ring.Length] == b);
    }

    /// <summary>Sets of rings of a size that hang together by common bonds.</summary>
    private static IEnumerable<int[]> Fused(int[] candidates, int[][] bondsOf, int size)
    {
        IEnumerable<int[]> sets = candidates.Select(r => new[] { r });
        for (int s = 1; s < size; s++)
        {
            sets = sets.SelectMany(set => candidates
                .Where(r => !set.Contains(r) && set.Any(known => bondsOf[known].Intersect(bondsOf[r]).Any()))
                .Select(r => set.Append(r).Order().ToArray()));
        }

        return sets.DistinctBy(set => string.Join(',', set));
    }

    /// <summary>Electrons that an atom gives to a ring it is in; null where it cannot be part of an aromatic ring.</summary>
    private static int? Electrons(ImmutableArray<Atom> atoms, ImmutableArray<Bond> bonds, HashSet<int> ringBonds, int index)
    {
        Atom atom = atoms[index];
        if (Shell(atom.AtomicNumber) is not (int outer, int valence))
        {
            return null;
        }

        int[] own = [.. Enumerable.Range(0, bonds.Length).Where(b => bonds[b].A == index || bonds[b].B == index)];
        int[] multiple = [.. own.Where(b => bonds[b].Order > 1)];
        int partners = own.Length + atom.HydrogenCount;
        if (partners > 3 || multiple.Length > 1)
        {
            return null;
        }

        int electrons = valence - partners + Math.Max(0, outer - valence - atom.FormalCharge);
        if (electrons > 1 && own.Sum(b => bonds[b].Order - 1) > 1)
        {
            electrons = 1;
        }

        bool leaves = multiple.Length == 1 && !ringBonds.Contains(multiple[0]);
        bool isDrawnOff = leaves && Electronegativity(atoms[bonds[multiple[0]].A == index ? bonds[multiple[0]].B : bonds[multiple[0]].A]) > Electronegativity(atom);
        return electrons switch
        {
            < 1 => null,
            1 when multiple.Length == 0 => atom.FormalCharge == 1 ? 0 : null,
            1 => isDrawnOff ? 0 : 1,
            _ => (electrons - (isDrawnOff ? 1 : 0)) % 2 == 1 ? 1 : 2,
        };
    }

    /// <summary>Electrons in the outer shell and usual valence of the elements that can be part of an aromatic ring.</summary>
    private static (int Outer, int Valence)? Shell(int atomicNumber) => atomicNumber switch
    {
        6 => (4, 4),
        7 or 15 or 33 => (5, 3),
        8 or 16 or 34 => (6, 2),
        _ => null,
    };

    /// <summary>Order of electronegativity as far as it matters here: more outer electrons first, then the lighter.</summary>
    private static int Electronegativity(Atom atom) => atom.AtomicNumber switch
    {
        9 => 9,
        8 => 8,
        17 => 7,
        7 => 6,
        35 => 5,
        16 => 4,
        53 => 3,
        34 => 2,
        6 => 2,
        _ => 1,
    };
}
