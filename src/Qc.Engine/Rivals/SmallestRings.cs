using System.Collections.Immutable;

namespace Qc.Engine.Rivals;

/// <summary>
/// A smallest set of smallest rings: shortest closed walks through each atom and bond, taken by length as long as they are not
/// sums (over bonds, modulo 2) of those taken before (J. D. Horton, SIAM J. Comput. 16 (1987) 358, from memory).
/// </summary>
internal static class SmallestRings
{
    /// <summary>Most bonds of a structure: their sums are kept as bits of a word.</summary>
    public const int MostBonds = 128;

    /// <summary>Rings as atoms in ring order, shortest first.</summary>
    /// <param name="atoms">Number of atoms.</param>
    /// <param name="bonds">Bonds as pairs of atoms; at most <see cref="MostBonds"/>.</param>
    public static ImmutableArray<ImmutableArray<int>> Of(int atoms, IReadOnlyList<(int A, int B)> bonds)
    {
        List<(int Atom, int Bond)>[] edges = [.. Enumerable.Range(0, atoms).Select(_ => new List<(int Atom, int Bond)>())];
        for (int b = 0; b < bonds.Count; b++)
        {
            edges[bonds[b].A].Add((bonds[b].B, b));
            edges[bonds[b].B].Add((bonds[b].A, b));
        }

        var candidates = new List<(UInt128 Bonds, ImmutableArray<int> Ring)>();
        int components = 0;
        var seen = new bool[atoms];
        for (int root = 0; root < atoms; root++)
        {
            (int Atom, int Bond)[] parent = Walk(edges, root);
            components += seen[root] ? 0 : 1;
            for (int v = 0; v < atoms; v++)
            {
                seen[v] |= parent[v].Atom >= 0;
            }

            for (int b = 0; b < bonds.Count && bonds.Count >= atoms; b++)
            {
                AddRing(candidates, parent, root, bonds[b], b);
            }
        }

        return Independent(candidates, bonds.Count - atoms + components);
    }

    /// <summary>Shortest ways from a root: of each atom the one before it (the root's is itself), -1 where there is no way.</summary>
    private static (int Atom, int Bond)[] Walk(List<(int Atom, int Bond)>[] edges, int root)
    {
        var parent = new (int Atom, int Bond)[edges.Length];
        Array.Fill(parent, (-1, -1));
        parent[root] = (root, -1);
        var queue = new Queue<int>([root]);
        while (queue.TryDequeue(out int atom))
        {
            foreach ((int next, int bond) in edges[atom])
            {
                if (parent[next].Atom < 0)
                {
                    parent[next] = (atom, bond);
                    queue.Enqueue(next);
                }
            }
        }

        return parent;
    }

    /// <summary>The ring that a bond closes with the ways from the root to its ends, where these meet only at the root.</summary>
    private static void AddRing(
        List<(UInt128 Bonds, ImmutableArray<int> Ring)> candidates, (int Atom, int Bond)[] parent, int root, (int A, int B) bond, int index)
    {
        if (parent[bond.A].Atom < 0 || parent[bond.A].Bond == index || parent[bond.B].Bond == index)
        {
            return;
        }

        UInt128 sum = UInt128.One << index;
        var ring = new List<int>();
        for (int v = bond.A; v != root; v = parent[v].Atom)
        {
            ring.Insert(0, v);
            sum |= UInt128.One << parent[v].Bond;
        }

        ring.Insert(0, root);
        for (int v = bond.B; v != root; v = parent[v].Atom)
        {
            if (ring.Contains(v))
            {
                return;
            }

            ring.Add(v);
            sum |= UInt128.One << parent[v].Bond;
        }

        if (!candidates.Exists(known => known.Bonds == sum))
        {
            candidates.Add((sum, [.. ring]));
        }
    }

    private static ImmutableArray<ImmutableArray<int>> Independent(List<(UInt128 Bonds, ImmutableArray<int> Ring)> candidates, int wanted)
    {
        var rings = ImmutableArray.CreateBuilder<ImmutableArray<int>>();
        var basis = new List<UInt128>();
        foreach ((UInt128 bonds, ImmutableArray<int> ring) in candidates.OrderBy(candidate => candidate.Ring.Length).ThenBy(candidate => candidate.Bonds))
        {
            if (rings.Count == wanted)
            {
                break;
            }

            UInt128 rest = bonds;
            foreach (UInt128 vector in basis)
            {
                rest = UInt128.Min(rest, rest ^ vector);
            }

            if (rest != 0)
            {
                basis.Add(rest);
                basis.Sort((x, y) => y.CompareTo(x));
                rings.Add(ring);
            }
        }

        return rings.ToImmutable();
    }
}
