using System.Globalization;
using System.Text;
using Qc.Engine.Structures;

namespace Qc.Engine.Rivals;

/// <summary>The spanning trees along which a structure is written, ring closures, and which way the bonds beside double bonds lean.</summary>
internal sealed class SmilesTree
{
    private readonly Molecule _molecule;
    private readonly int[] _rank;
    private readonly int[] _parent;
    private readonly List<int>[] _children;
    private readonly List<int>[] _closures;
    private readonly int[] _size;
    private readonly int[] _visit;
    private readonly Dictionary<int, int> _lean;
    private int _visits;

    public SmilesTree(Molecule molecule, int[] order)
    {
        _molecule = molecule;
        int count = molecule.Atoms.Length;
        _rank = new int[count];
        for (int i = 0; i < count; i++)
        {
            _rank[order[i]] = i;
        }

        _parent = new int[count];
        _size = new int[count];
        _visit = new int[count];
        _children = [.. Enumerable.Range(0, count).Select(_ => new List<int>())];
        _closures = [.. Enumerable.Range(0, count).Select(_ => new List<int>())];
        foreach (int start in order.OrderBy(atom => Math.Min(2, molecule.BondsOf(atom).Length)).ThenBy(atom => molecule.Atoms[atom].AtomicNumber == 6 ? 0 : 1))
        {
            if (_visit[start] == 0)
            {
                _parent[start] = -1;
                Walk(start);
                Roots.Add(new Branch(this, start));
            }
        }

        _lean = Leans();
    }

    /// <summary>One tree for each component.</summary>
    public List<Branch> Roots { get; } = [];

    private void Walk(int atom)
    {
        _visit[atom] = ++_visits;
        _size[atom] = 1;
        foreach (int next in _molecule.NeighboursOf(atom).OrderBy(other => _rank[other]))
        {
            if (_visit[next] == 0)
            {
                _parent[next] = atom;
                _children[atom].Add(next);
                Walk(next);
                _size[atom] += _size[next];
            }
            else if (_visit[next] < _visit[atom] && next != _parent[atom])
            {
                _closures[next].Add(atom);
                _closures[atom].Add(next);
            }
        }

        _children[atom].Sort((x, y) => _size[x] != _size[y] ? _size[x].CompareTo(_size[y]) : _rank[x].CompareTo(_rank[y]));
    }

    /// <summary>
    /// For single bonds beside double bonds of stated geometry: +1 where the atom visited later is drawn above the other, else -1.
    /// All bonds of a conjugated run depend on one another, so each run is settled from its first bond.
    /// </summary>
    private Dictionary<int, int> Leans()
    {
        var relations = new List<(int First, int Second, int Sign)>();
        foreach (Bond bond in _molecule.Bonds.Where(bond => bond.SideOfA >= 0 && bond.SideOfB >= 0))
        {
            int first = BondIndex(bond.A, bond.SideOfA);
            int second = BondIndex(bond.B, bond.SideOfB);
            relations.Add((first, second, Outward(first, bond.A) * Outward(second, bond.B) * (bond.SidesAreCis ? 1 : -1)));
            foreach ((int atom, int marked) in new[] { (bond.A, first), (bond.B, second) })
            {
                relations.AddRange(_molecule.BondsOf(atom)
                    .Where(other => other != marked && _molecule.Bonds[other].Order == 1)
                    .Select(other => (marked, other, -Outward(marked, atom) * Outward(other, atom))));
            }
        }

        var lean = new Dictionary<int, int>();
        foreach ((int start, _, _) in relations)
        {
            lean.TryAdd(start, 1);
            for (bool changed = true; changed;)
            {
                changed = false;
                foreach ((int first, int second, int sign) in relations)
                {
                    changed |= lean.TryGetValue(first, out int known) && lean.TryAdd(second, known * sign);
                    changed |= lean.TryGetValue(second, out known) && lean.TryAdd(first, known * sign);
                }
            }
        }

        return lean;
    }

    private int BondIndex(int a, int b) => _molecule.BondsOf(a).First(bond => _molecule.Other(bond, a) == b);

    /// <summary>+1 where the bond is written away from the atom, -1 where towards it.</summary>
    private int Outward(int bond, int atom) => _visit[_molecule.Other(bond, atom)] > _visit[atom] ? 1 : -1;

    private string BondText(int from, int to)
    {
        int index = BondIndex(from, to);
        Bond bond = _molecule.Bonds[index];
        if (bond.IsAromatic)
        {
            return "";
        }

        if (bond.Order == 1 && _lean.TryGetValue(index, out int lean))
        {
            return lean > 0 ? "/" : "\\";
        }

        bool betweenAromatic = _molecule.Atoms[from].IsAromatic && _molecule.Atoms[to].IsAromatic;
        return bond.Order switch
        {
            1 => betweenAromatic ? "-" : "",
            2 => "=",
            _ => "#",
        };
    }

    /// <summary>The turn of the neighbours as they are written, from how the structure states it.</summary>
    private string TurnOf(int atom)
    {
        Winding winding = _molecule.Atoms[atom].Winding;
        if (winding == Winding.None)
        {
            return "";
        }

        const int hydrogenOrLonePair = -1;
        int[] stated = [.. _molecule.NeighboursOf(atom).Order()];
        int[] written = [.. _closures[atom].OrderBy(other => ClosureOrder(atom, other)), .. _children[atom]];
        written = _parent[atom] >= 0 ? [_parent[atom], .. written] : written;
        if (stated.Length == 3)
        {
            stated = [hydrogenOrLonePair, .. stated];
            written = _parent[atom] >= 0 ? [written[0], hydrogenOrLonePair, .. written[1..]] : [hydrogenOrLonePair, .. written];
        }

        int[] places = [.. written.Select(other => Array.IndexOf(stated, other))];
        int inversions = places.SelectMany((place, i) => places.Skip(i + 1).Where(later => later < place)).Count();
        return (winding == Winding.Clockwise) ^ (inversions % 2 == 1) ? "@@" : "@";
    }

    private int ClosureOrder(int atom, int other) => _visit[other] < _visit[atom] ? _visit[other] - _visits : _visit[other];

    /// <summary>A component, written from its start.</summary>
    internal sealed class Branch(SmilesTree tree, int start)
    {
        private readonly Dictionary<(int Opener, int Closer), int> _open = [];

        /// <summary>Its SMILES.</summary>
        public string Text()
        {
            var text = new StringBuilder();
            Write(text, start);
            return text.ToString();
        }

        private void Write(StringBuilder text, int atom)
        {
            text.Append(SmilesWriter.AtomText(tree._molecule, atom, tree.TurnOf(atom)));
            foreach (int other in tree._closures[atom].OrderBy(other => tree.ClosureOrder(atom, other)))
            {
                WriteClosure(text, atom, other);
            }

            for (int i = 0; i < tree._children[atom].Count; i++)
            {
                int child = tree._children[atom][i];
                bool isLast = i == tree._children[atom].Count - 1;
                text.Append(isLast ? "" : "(").Append(tree.BondText(atom, child));
                Write(text, child);
                text.Append(isLast ? "" : ")");
            }
        }

        private void WriteClosure(StringBuilder text, int atom, int other)
        {
            bool opens = tree._visit[atom] < tree._visit[other];
            (int, int) key = opens ? (atom, other) : (other, atom);
            int number;
            if (opens)
            {
                number = Enumerable.Range(1, tree._molecule.Bonds.Length).First(n => !_open.ContainsValue(n));
                _open.Add(key, number);
                text.Append(tree.BondText(atom, other));
            }
            else
            {
                number = _open[key];
                _open.Remove(key);
            }

            text.Append(number < 10 ? "" : "%").Append(number.ToString(CultureInfo.InvariantCulture));
        }
    }
}
