namespace Qc.Engine.Rivals;

/// <summary>
/// All constitutional isomers of a formula, each exactly once, one after another without keeping those already made.
/// </summary>
/// <remarks>
/// Method: canonical augmentation (B. D. McKay, J. Algorithms 26 (1998) 306, from memory). Heavy atoms are added one at a time
/// with all their bonds to atoms already there. Of each connected graph one atom that it can spare is canonically its last;
/// an extension counts only if the atom just added is equivalent to that one, so a graph grows from one parent only, and
/// isomers among the extensions of one parent are told by canonical form. Hydrogens are what the valences leave free; their
/// number fixes the sum of bond orders, which bounds the search.
/// The last atom is chosen by kind, then by a hash of its surroundings, and only among equals by canonical labelling.
/// Isomers are counted as chemists do: the Kekulé forms of an aromatic system are one (<see cref="KekuleForms"/>).
/// </remarks>
public sealed class IsomerGenerator
{
    private const int ColourRounds = 4;
    private const int HighestOrder = 3;

    private readonly IsomerFormula _formula;
    private readonly int _bondOrders;
    private readonly int[] _valence;
    private readonly int[] _left;
    private readonly LabelledGraph _graph = new();
    private readonly LabelledGraph _other = new();
    private readonly GraphLabelling _labelling = new();
    private readonly int[] _twinBefore = new int[LabelledGraph.MostVertices];
    private readonly int[] _orders = new int[LabelledGraph.MostVertices];
    private readonly List<Accepted> _accepted = [];

    private IsomerGenerator(IsomerFormula formula, int bondOrders)
    {
        _formula = formula;
        _bondOrders = bondOrders;
        _valence = [.. formula.Heavy.Select(atoms => atoms.Valence)];
        _left = new int[_valence.Length];
    }

    /// <summary>The isomers of a formula, in an order that is always the same.</summary>
    /// <exception cref="ArgumentException">More than 64 heavy atoms: there would be no end to it.</exception>
    /// <exception cref="OperationCanceledException">The caller gave up.</exception>
    public static IEnumerable<IsomerGraph> Isomers(IsomerFormula formula, CancellationToken cancellation = default) =>
        KekuleForms.OneOfEach(Multigraphs(formula, cancellation));

    /// <summary>The same with the Kekulé forms of an aromatic system counted apart: all multigraphs with the given valences.</summary>
    internal static IEnumerable<IsomerGraph> Multigraphs(IsomerFormula formula, CancellationToken cancellation = default)
    {
        if (formula.HeavyCount > LabelledGraph.MostVertices)
        {
            throw new ArgumentException($"{formula.HeavyCount} heavy atoms; at most {LabelledGraph.MostVertices} can be generated.", nameof(formula));
        }

        return formula.BondOrders is { } orders ? new IsomerGenerator(formula, orders).Walk(cancellation) : [];
    }

    private IEnumerable<IsomerGraph> Walk(CancellationToken cancellation)
    {
        var open = new Stack<IsomerGraph>();
        for (int kind = _valence.Length - 1; kind >= 0; kind--)
        {
            open.Push(new IsomerGraph(_formula, [(byte)kind], []));
        }

        int wanted = _formula.HeavyCount;
        while (open.TryPop(out IsomerGraph? parent))
        {
            if (parent.Kinds.Length == wanted)
            {
                yield return parent;
                continue;
            }

            cancellation.ThrowIfCancellationRequested();
            foreach (IsomerGraph child in Children(parent))
            {
                open.Push(child);
            }
        }
    }

    private IEnumerable<IsomerGraph> Children(IsomerGraph parent)
    {
        Load(parent);
        _accepted.Clear();
        int spent = parent.Bonds.Sum(bond => bond.Order);
        for (int kind = 0; kind < _valence.Length; kind++)
        {
            if (_left[kind] > 0)
            {
                _left[kind]--;
                (int least, int most) = Bounds(spent, kind);
                Extend(parent, kind, 0, 0, least, most);
                _left[kind]++;
            }
        }

        return _accepted.Select(accepted => accepted.Graph).Reverse();
    }

    private void Load(IsomerGraph parent)
    {
        _graph.Clear();
        for (int kind = 0; kind < _left.Length; kind++)
        {
            _left[kind] = _formula.Heavy[kind].Count;
        }

        foreach (byte kind in parent.Kinds)
        {
            _graph.AddVertex(kind);
            _left[kind]--;
        }

        foreach (IsomerBond bond in parent.Bonds)
        {
            _graph.Join(bond.A, bond.B, bond.Order);
        }

        for (int v = 0; v < _graph.Count; v++)
        {
            _twinBefore[v] = v - 1;
            while (_twinBefore[v] >= 0 && !_graph.AreTwins(_twinBefore[v], v))
            {
                _twinBefore[v]--;
            }
        }
    }

    /// <summary>
    /// Bond orders that a new atom may bring so that the rest can still reach the required sum: each later atom brings one at
    /// least, and all later bonds use valences that are free.
    /// </summary>
    private (int Least, int Most) Bounds(int spent, int kind)
    {
        int later = 0;
        int laterValence = 0;
        for (int k = 0; k < _left.Length; k++)
        {
            later += _left[k];
            laterValence += _left[k] * _valence[k];
        }

        int free = 0;
        for (int v = 0; v < _graph.Count; v++)
        {
            free += _valence[_graph.Kind(v)] - _graph.Used(v);
        }

        int missing = _bondOrders - spent;
        int most = Math.Min(Math.Min(_valence[kind], free), missing - later);
        int least = 1;
        while (least <= most && !CanReach(missing - least, free + _valence[kind] - (2 * least), later, laterValence))
        {
            least++;
        }

        while (most >= least && !CanReach(missing - most, free + _valence[kind] - (2 * most), later, laterValence))
        {
            most--;
        }

        return (least, most);
    }

    private static bool CanReach(int missing, int free, int later, int laterValence) =>
        later == 0 ? missing == 0 : free > 0 && missing <= Math.Min(laterValence, (free + laterValence) / 2);

    /// <summary>Chooses the bond order to each atom in turn. Of twins the earlier takes no less than the later.</summary>
    private void Extend(IsomerGraph parent, int kind, int atom, int sum, int least, int most)
    {
        if (atom == _graph.Count)
        {
            if (sum >= least)
            {
                Try(parent, kind);
            }

            return;
        }

        int highest = Math.Min(Math.Min(HighestOrder, most - sum), _valence[_graph.Kind(atom)] - _graph.Used(atom));
        if (_twinBefore[atom] >= 0)
        {
            highest = Math.Min(highest, _orders[_twinBefore[atom]]);
        }

        for (int order = 0; order <= highest; order++)
        {
            _orders[atom] = order;
            Extend(parent, kind, atom + 1, sum + order, least, most);
        }
    }

    private void Try(IsomerGraph parent, int kind)
    {
        int atoms = _graph.Count;
        int added = _graph.AddVertex(kind);
        for (int v = 0; v < atoms; v++)
        {
            if (_orders[v] > 0)
            {
                _graph.Join(v, added, _orders[v]);
            }
        }

        if (IsLast(added, out ulong hash, out int[]? code) && IsNew(hash, ref code))
        {
            _accepted.Add(new Accepted(Grown(parent, kind), hash, code));
        }

        _graph.RemoveLast();
    }

    /// <summary>Whether the atom just added is the one that canonically comes last.</summary>
    private bool IsLast(int added, out ulong hash, out int[]? code)
    {
        hash = 0;
        code = null;
        int kind = _graph.Kind(added);
        for (int v = 0; v < added; v++)
        {
            if (_graph.Kind(v) > kind && _graph.CanSpare(v))
            {
                return false;
            }
        }

        Span<ulong> colours = stackalloc ulong[LabelledGraph.MostVertices];
        _labelling.Colour(_graph, ColourRounds, colours);
        ulong equals = 0;
        bool onlyTwins = true;
        for (int v = 0; v <= added; v++)
        {
            hash += colours[v];
            if (v == added || _graph.Kind(v) != kind || colours[v] < colours[added] || !_graph.CanSpare(v))
            {
                continue;
            }

            if (colours[v] > colours[added])
            {
                return false;
            }

            equals |= 1ul << v;
            onlyTwins &= _graph.AreTwins(v, added);
        }

        if (onlyTwins)
        {
            return true;
        }

        _labelling.Label(_graph);
        code = _labelling.Code;
        equals |= 1ul << added;
        foreach (int v in _labelling.Order)
        {
            if ((equals & (1ul << v)) != 0)
            {
                return v == added || _labelling.AreEquivalent(v, added);
            }
        }

        return false;
    }

    /// <summary>Whether none of the extensions accepted so far is isomorphic; unlike hashes settle it nearly always.</summary>
    private bool IsNew(ulong hash, ref int[]? code)
    {
        for (int i = 0; i < _accepted.Count; i++)
        {
            if (_accepted[i].Hash != hash)
            {
                continue;
            }

            code ??= CodeOf(_graph);
            if (_accepted[i].Code is not { } other)
            {
                other = CodeOf(_accepted[i].Graph);
                _accepted[i] = _accepted[i] with { Code = other };
            }

            if (other.AsSpan().SequenceEqual(code))
            {
                return false;
            }
        }

        return true;
    }

    private int[] CodeOf(LabelledGraph graph)
    {
        _labelling.Label(graph);
        return _labelling.Code;
    }

    private int[] CodeOf(IsomerGraph graph)
    {
        _other.Clear();
        foreach (byte kind in graph.Kinds)
        {
            _other.AddVertex(kind);
        }

        foreach (IsomerBond bond in graph.Bonds)
        {
            _other.Join(bond.A, bond.B, bond.Order);
        }

        return CodeOf(_other);
    }

    private IsomerGraph Grown(IsomerGraph parent, int kind)
    {
        int atoms = parent.Kinds.Length;
        var kinds = new byte[atoms + 1];
        parent.Kinds.CopyTo(kinds, 0);
        kinds[atoms] = (byte)kind;
        int added = 0;
        for (int v = 0; v < atoms; v++)
        {
            added += _orders[v] > 0 ? 1 : 0;
        }

        var bonds = new IsomerBond[parent.Bonds.Length + added];
        parent.Bonds.CopyTo(bonds, 0);
        int next = parent.Bonds.Length;
        for (int v = 0; v < atoms; v++)
        {
            if (_orders[v] > 0)
            {
                bonds[next++] = new IsomerBond((byte)v, (byte)atoms, (byte)_orders[v]);
            }
        }

        return new IsomerGraph(_formula, kinds, bonds);
    }

    private readonly record struct Accepted(IsomerGraph Graph, ulong Hash, int[]? Code);
}
