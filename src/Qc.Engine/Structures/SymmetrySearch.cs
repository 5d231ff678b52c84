using System.Collections.Immutable;

namespace Qc.Engine.Structures;

/// <summary>An atom, or one of the two hydrogens on it, that a symmetry is asked to move.</summary>
/// <param name="Atom">Atom index.</param>
/// <param name="Side">0 or 1 for a hydrogen of a held pair; -1 for the atom as a whole.</param>
internal readonly record struct Spot(int Atom, int Side);

/// <summary>
/// Asks whether some symmetry of the molecule carries given spots to given others: a rotation (arrangements kept) or
/// a reflection (arrangements reversed). Hydrogens carried by either are chemically equivalent in an achiral medium
/// (homotopic or enantiotopic); hydrogens carried by neither are diastereotopic or unrelated.
/// </summary>
/// <remarks>
/// Method: colour refinement of the molecule and of its image together, where the sense of an arrangement whose neighbours
/// differ in colour is part of the colour; ties are broken by individualising one node and trying each of its possible images
/// (B. D. McKay, Congressus Numerantium 30 (1981) 45, from memory). A CH2 or CH3 that is not asked about holds nothing:
/// swapping two of its hydrogens undoes any reversal.
/// A search that needs more than <see cref="MostRefinements"/> refinements answers "no": apart rather than wrongly together.
/// </remarks>
internal sealed class SymmetrySearch(SymmetryGraph graph, ImmutableArray<StereoUnit> units, Func<Spot, StereoUnit?> hydrogenPair)
{
    /// <summary>Limit of work for one question.</summary>
    public const int MostRefinements = 400;

    private int _left;

    /// <summary>Whether a rotation or a reflection carries each first spot to its second.</summary>
    public bool Carries(params ReadOnlySpan<(Spot From, Spot To)> moves)
    {
        var images = new Dictionary<int, int>();
        var origins = new Dictionary<int, int>();
        foreach ((Spot from, Spot to) in moves)
        {
            if (!Agrees(images, from.Atom, to.Atom) || !Agrees(origins, to.Atom, from.Atom))
            {
                return false;
            }
        }

        ImmutableArray<int> here = graph.ComponentOf(moves[0].From.Atom);
        ImmutableArray<int> there = graph.ComponentOf(moves[0].To.Atom);
        if (here.Length != there.Length)
        {
            return false;
        }

        (Spot From, Spot To)[] list = moves.ToArray();
        var first = new Side(graph, here, UnitsOf(here, list.Select(move => move.From)), mirrored: false);
        return IsMatched(first, there, list, mirrored: false) || IsMatched(first, there, list, mirrored: true);
    }

    private bool IsMatched(Side first, ImmutableArray<int> there, (Spot From, Spot To)[] moves, bool mirrored)
    {
        _left = MostRefinements;
        var second = new Side(graph, there, UnitsOf(there, moves.Select(move => move.To)), mirrored);
        int[] a = [.. graph.Kinds];
        int[] b = [.. graph.Kinds];
        int fresh = graph.Kinds.Length;
        foreach ((Spot from, Spot to) in moves.DistinctBy(move => move.From.Atom))
        {
            a[from.Atom] = fresh + graph.Kinds[from.Atom];
            b[to.Atom] = fresh + graph.Kinds[to.Atom];
            fresh += graph.Kinds.Length;
        }

        return Search(first, second, a, b);
    }

    private bool Search(Side first, Side second, int[] a, int[] b)
    {
        if (_left-- == 0 || !Refinement.Run(first, second, a, b))
        {
            _left = Math.Max(_left, 0);
            return false;
        }

        int tied = first.FirstTied(a);
        if (tied < 0)
        {
            return true;
        }

        int fresh = a.Max() + 1;
        foreach (int image in second.Nodes.Where(node => b[node] == a[tied]))
        {
            int[] nextA = [.. a];
            int[] nextB = [.. b];
            nextA[tied] = fresh;
            nextB[image] = fresh;
            if (Search(first, second, nextA, nextB))
            {
                return true;
            }
        }

        return false;
    }

    private List<StereoUnit> UnitsOf(ImmutableArray<int> component, IEnumerable<Spot> spots)
    {
        List<StereoUnit> list = [.. units.Where(unit => component.Contains(unit.Owners[0]))];
        list.AddRange(spots.Where(spot => spot.Side >= 0).Distinct().Select(spot => hydrogenPair(spot)).OfType<StereoUnit>());
        return list;
    }

    private static bool Agrees(Dictionary<int, int> map, int key, int value) =>
        map.TryGetValue(key, out int known) ? known == value : map.TryAdd(key, value);

    /// <summary>One of the two things compared: a component with its arrangements, seen as it is or in the mirror.</summary>
    internal sealed class Side(SymmetryGraph graph, ImmutableArray<int> nodes, List<StereoUnit> units, bool mirrored)
    {
        private readonly ILookup<int, StereoUnit> _unitsOf =
            units.SelectMany(unit => unit.Owners.Select(owner => (owner, unit))).ToLookup(entry => entry.owner, entry => entry.unit);

        /// <summary>The nodes of the component.</summary>
        public ImmutableArray<int> Nodes => nodes;

        /// <summary>What the colours of its surroundings say of a node.</summary>
        public int[] Signature(int node, int[] colours)
        {
            ImmutableArray<(int Atom, int Kind)> edges = graph.Edges(node);
            var neighbours = new int[edges.Length];
            for (int i = 0; i < edges.Length; i++)
            {
                neighbours[i] = (colours[edges[i].Atom] * 8) + edges[i].Kind;
            }

            Array.Sort(neighbours);
            int[] senses = [.. _unitsOf[node].Select(unit => ((int)unit.Shape * 4) + unit.Sense(colours, mirrored) + 1).Order()];
            return [colours[node], .. neighbours, -1, .. senses];
        }

        /// <summary>A node that some arrangement, or failing that the graph, cannot tell from another yet; else -1.</summary>
        public int FirstTied(int[] colours)
        {
            foreach (StereoUnit unit in units)
            {
                if (unit.Tied(colours) is >= 0 and var tied)
                {
                    return tied;
                }
            }

            return nodes.GroupBy(node => colours[node]).Where(cell => cell.Count() > 1)
                .Select(cell => cell.First()).DefaultIfEmpty(-1).First();
        }
    }
}
