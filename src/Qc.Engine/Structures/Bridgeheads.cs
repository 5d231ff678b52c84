using System.Collections.Immutable;

namespace Qc.Engine.Structures;

/// <summary>
/// Sets undrawn bridgeheads the way small rings force them: two atoms joined by three ways through rings carry their fourth
/// substituents outward, so seen from those substituents the three ways turn in opposite senses. For fused rings that is the cis form.
/// </summary>
internal static class Bridgeheads
{
    // Atoms of all ways together up to which the form is forced. Fused: hydrindane (9 atoms) is the first that can be trans.
    // Bridged: in-out forms need rings of ten and more. Both from memory.
    private const int MostAtomsFused = 8;
    private const int MostAtomsBridged = 12;

    /// <summary>The arrangements with forced bridgeheads set; those are marked as drawn, because they are no open question.</summary>
    public static ImmutableArray<StereoUnit> Settle(Molecule molecule, ImmutableArray<StereoUnit> units)
    {
        ImmutableArray<StereoUnit>.Builder settled = units.ToBuilder();
        int[] heads = [.. Enumerable.Range(0, units.Length).Where(i => IsBridgehead(molecule, units[i]))];
        foreach (int second in heads)
        {
            foreach (int first in heads.TakeWhile(head => head != second))
            {
                (int anchor, int open) = settled[second].IsDrawn ? (second, first) : (first, second);
                if (settled[open].IsDrawn || ThreeWays(molecule, settled[anchor].Owners[0], settled[open].Owners[0]) is not { } ways)
                {
                    continue;
                }

                int seenAnchor = Turn(settled[anchor], [.. ways.Select(way => way.First)]);
                int seenOpen = Turn(settled[open], [.. ways.Select(way => way.Last)]);
                int sign = seenAnchor == seenOpen ? -settled[open].Sign : settled[open].Sign;
                settled[open] = settled[open] with { Sign = sign, IsDrawn = true };
                settled[anchor] = settled[anchor] with { IsDrawn = true };
            }
        }

        return settled.ToImmutable();
    }

    private static bool IsBridgehead(Molecule molecule, StereoUnit unit) =>
        unit.Shape == StereoShape.Tetrahedral
        && molecule.NeighboursOf(unit.Owners[0]).Count(other => molecule.Rings.Any(ring =>
            ring.Contains(unit.Owners[0]) && ring.Contains(other))) == 3;

    // The sense in which three of the neighbours turn, seen from the fourth.
    private static int Turn(StereoUnit unit, ImmutableArray<int> three)
    {
        int outer = unit.Neighbours.Single(neighbour => !three.Contains(neighbour));
        int[] places = [unit.Neighbours.IndexOf(outer), .. three.Select(neighbour => unit.Neighbours.IndexOf(neighbour))];
        int parity = 1;
        for (int i = 0; i < 4; i++)
        {
            for (int j = i + 1; j < 4; j++)
            {
                parity *= places[i] < places[j] ? 1 : -1;
            }
        }

        return unit.Sign * parity;
    }

    // Three ways without a common atom, the rings small enough to force the form; as first and last step. Null where there are none.
    private static List<(int First, int Last)>? ThreeWays(Molecule molecule, int a, int b)
    {
        var used = new HashSet<int> { a, b };
        var ways = new List<(int First, int Last)>();
        int atoms = 2;
        if (molecule.BondBetween(a, b) is not null)
        {
            ways.Add((b, a));
        }

        while (ways.Count < 3)
        {
            if (ShortestWay(molecule, a, b, used) is not { } way)
            {
                return null;
            }

            used.UnionWith(way);
            ways.Add((way[0], way[^1]));
            atoms += way.Count;
        }

        bool isFused = molecule.BondBetween(a, b) is not null;
        return atoms <= (isFused ? MostAtomsFused : MostAtomsBridged) ? ways : null;
    }

    private static List<int>? ShortestWay(Molecule molecule, int a, int b, HashSet<int> used)
    {
        var from = new Dictionary<int, int>();
        var queue = new Queue<int>();
        foreach (int start in molecule.NeighboursOf(a).Where(atom => !used.Contains(atom)).Order())
        {
            from[start] = a;
            queue.Enqueue(start);
        }

        while (queue.TryDequeue(out int at))
        {
            if (molecule.BondBetween(at, b) is not null)
            {
                var way = new List<int>();
                for (int step = at; step != a; step = from[step])
                {
                    way.Insert(0, step);
                }

                return way;
            }

            foreach (int next in molecule.NeighboursOf(at).Where(atom => !used.Contains(atom) && !from.ContainsKey(atom)).Order())
            {
                from[next] = at;
                queue.Enqueue(next);
            }
        }

        return null;
    }
}
