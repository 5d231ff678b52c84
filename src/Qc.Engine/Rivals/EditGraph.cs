using System.Collections.Immutable;
using Qc.Engine.Structures;

namespace Qc.Engine.Rivals;

/// <summary>A structure laid open for editing: hydrogens by atom, bonds with Kekulé orders.</summary>
internal sealed class EditGraph
{
    private readonly Molecule _molecule;
    private readonly int[] _hydrogens;
    private readonly ImmutableArray<(int A, int B, int Order)> _bonds;
    private readonly HashSet<int> _ringBonds;

    public EditGraph(Molecule molecule)
    {
        _molecule = molecule;
        _hydrogens = [.. molecule.Atoms.Select(atom => atom.HydrogenCount)];
        _bonds = [.. molecule.Bonds.Select(bond => (bond.A, bond.B, bond.Order))];
        _ringBonds = [.. Enumerable.Range(0, _bonds.Length).Where(IsInRing)];
    }

    /// <summary>Two groups change places: an ester the other way round, OH and OCH3 of a benzene ring exchanged.</summary>
    public IEnumerable<Molecule> Swaps()
    {
        (int Stem, int Head, int Bond)[] groups = [.. Groups()];
        for (int i = 0; i < groups.Length; i++)
        {
            for (int j = i + 1; j < groups.Length; j++)
            {
                (int Stem, int Head, int Bond) one = groups[i];
                (int Stem, int Head, int Bond) two = groups[j];
                if (one.Bond == two.Bond || one.Stem == two.Stem || Fragment(one).Contains(two.Stem) || Fragment(two).Contains(one.Stem))
                {
                    continue;
                }

                yield return Build(
                    _hydrogens,
                    _bonds.SetItem(one.Bond, (one.Stem, two.Head, 1)).SetItem(two.Bond, (two.Stem, one.Head, 1)));
            }
        }
    }

    /// <summary>A group changes places with a hydrogen: positional isomers along chains and round rings, O- and N-substitution.</summary>
    public IEnumerable<Molecule> Moves()
    {
        foreach ((int Stem, int Head, int Bond) group in Groups())
        {
            HashSet<int> fragment = Fragment(group);
            for (int target = 0; target < _hydrogens.Length; target++)
            {
                if (target != group.Stem && _hydrogens[target] > 0 && !fragment.Contains(target))
                {
                    yield return Build(With(_hydrogens, (group.Stem, 1), (target, -1)), _bonds.SetItem(group.Bond, (target, group.Head, 1)));
                }
            }
        }
    }

    /// <summary>
    /// A CH2 leaves its place (out of a chain or ring, or off the end of one) and goes in between another bond, of two heavy
    /// atoms or of one to hydrogen: branching of chains, esters with a carbon more on one side, ethers from alcohols.
    /// </summary>
    /// <param name="smallestRing">A ring is not made smaller than this.</param>
    public IEnumerable<Molecule> Methylenes(int smallestRing)
    {
        foreach (Atom atom in _molecule.Atoms.Where(atom => atom is { AtomicNumber: 6, FormalCharge: 0, Isotope: 0 } && atom.HydrogenCount >= 2))
        {
            int[] own = [.. _molecule.BondsOf(atom.Index)];
            if (own.Length is 0 or > 2
                || own.Any(bond => _bonds[bond].Order != 1)
                || _molecule.Rings.Any(ring => ring.Contains(atom.Index) && ring.Length <= smallestRing))
            {
                continue;
            }

            int first = _molecule.Other(own[0], atom.Index);
            int second = own.Length == 2 ? _molecule.Other(own[1], atom.Index) : -1;
            int[] without = second >= 0
                ? With(_hydrogens, (atom.Index, 2 - atom.HydrogenCount))
                : With(_hydrogens, (first, 1), (atom.Index, 2 - atom.HydrogenCount));
            ImmutableArray<(int A, int B, int Order)> rest = _bonds.RemoveRange(own.Select(bond => _bonds[bond]));
            rest = second >= 0 ? rest.Add((first, second, 1)) : rest;
            for (int bond = 0; bond < rest.Length; bond++)
            {
                (int a, int b, int order) = rest[bond];
                if (order == 1)
                {
                    yield return Build(without, rest.SetItem(bond, (a, atom.Index, 1)).Add((atom.Index, b, 1)));
                }
            }

            for (int target = 0; target < without.Length; target++)
            {
                if (target != atom.Index && without[target] > 0)
                {
                    yield return Build(With(without, (target, -1), (atom.Index, 1)), rest.Add((target, atom.Index, 1)));
                }
            }
        }
    }

    /// <summary>A double bond moves on by one, and a hydrogen goes the other way.</summary>
    public IEnumerable<Molecule> DoubleBondShifts()
    {
        for (int bond = 0; bond < _bonds.Length; bond++)
        {
            if (_bonds[bond].Order != 2 || _molecule.Bonds[bond].IsAromatic)
            {
                continue;
            }

            foreach ((int far, int middle) in new[] { (_bonds[bond].A, _bonds[bond].B), (_bonds[bond].B, _bonds[bond].A) })
            {
                foreach (int next in _molecule.BondsOf(middle).Where(other => other != bond && _bonds[other].Order == 1))
                {
                    int end = _molecule.Other(next, middle);
                    if (_hydrogens[end] > 0)
                    {
                        yield return Build(
                            With(_hydrogens, (end, -1), (far, 1)),
                            _bonds.SetItem(bond, _bonds[bond] with { Order = 1 }).SetItem(next, _bonds[next] with { Order = 2 }));
                    }
                }
            }
        }
    }

    /// <summary>Bonds that can be cut: single, in no ring; each seen from either end.</summary>
    private IEnumerable<(int Stem, int Head, int Bond)> Groups()
    {
        for (int bond = 0; bond < _bonds.Length; bond++)
        {
            if (_bonds[bond].Order == 1 && !_ringBonds.Contains(bond))
            {
                yield return (_bonds[bond].A, _bonds[bond].B, bond);
                yield return (_bonds[bond].B, _bonds[bond].A, bond);
            }
        }
    }

    /// <summary>Atoms of a group.</summary>
    private HashSet<int> Fragment((int Stem, int Head, int Bond) group) => Reached(group.Head, group.Bond);

    private bool IsInRing(int bond) => Reached(_bonds[bond].A, bond).Contains(_bonds[bond].B);

    private HashSet<int> Reached(int from, int withoutBond)
    {
        var seen = new HashSet<int> { from };
        var queue = new Queue<int>(seen);
        while (queue.TryDequeue(out int atom))
        {
            foreach (int bond in _molecule.BondsOf(atom))
            {
                if (bond != withoutBond && seen.Add(_molecule.Other(bond, atom)))
                {
                    queue.Enqueue(_molecule.Other(bond, atom));
                }
            }
        }

        return seen;
    }

    private static int[] With(int[] hydrogens, params ReadOnlySpan<(int Atom, int Change)> changes)
    {
        int[] copy = [.. hydrogens];
        foreach ((int atom, int change) in changes)
        {
            copy[atom] += change;
        }

        return copy;
    }

    private Molecule Build(int[] hydrogens, ImmutableArray<(int A, int B, int Order)> bonds) => Perception.Complete(
        [.. _molecule.Atoms.Select(atom => new Atom(atom.Index, atom.AtomicNumber, atom.FormalCharge, hydrogens[atom.Index], false, atom.Isotope))],
        [.. bonds.Select(bond => new Bond(bond.A, bond.B, bond.Order, false))]);
}
