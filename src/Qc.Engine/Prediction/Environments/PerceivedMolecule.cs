using System.Collections.Immutable;
using Qc.Engine.Structures;

namespace Qc.Engine.Prediction.Environments;

/// <summary>
/// A molecule with what the tables ask about its atoms worked out once: neighbours, hybridisation, rings,
/// and the name of the substituent that hangs on each bond.
/// </summary>
internal sealed class PerceivedMolecule
{
    private readonly ImmutableArray<ImmutableArray<int>> _neighbours;
    private readonly ImmutableArray<ImmutableArray<int>> _ringsOf;
    private readonly Dictionary<(int From, int Root), Substituent> _substituents = [];
    private readonly Dictionary<int, RingFaces?> _faces = [];
    private readonly Dictionary<int, ChairBalance?> _chairs = [];

    /// <summary>Perceives a molecule.</summary>
    public PerceivedMolecule(Molecule molecule)
    {
        Molecule = molecule;
        _neighbours = [.. molecule.Atoms.Select(atom => molecule.NeighboursOf(atom.Index).ToImmutableArray())];
        _ringsOf =
        [
            .. molecule.Atoms.Select(atom =>
                Enumerable.Range(0, molecule.Rings.Length)
                    .Where(ring => molecule.Rings[ring].Contains(atom.Index))
                    .ToImmutableArray()),
        ];
    }

    /// <summary>The graph.</summary>
    public Molecule Molecule { get; }

    /// <summary>An atom.</summary>
    public Atom this[int atom] => Molecule.Atoms[atom];

    /// <summary>Heavy neighbours of an atom, in bond order.</summary>
    public ImmutableArray<int> Neighbours(int atom) => _neighbours[atom];

    /// <summary>Indices of the rings that an atom is in.</summary>
    public ImmutableArray<int> RingsOf(int atom) => _ringsOf[atom];

    /// <summary>The ring with this index, atoms in ring order.</summary>
    public ImmutableArray<int> Ring(int ring) => Molecule.Rings[ring];

    /// <summary>The bond between two neighbours.</summary>
    public Bond BondBetween(int a, int b) =>
        Molecule.BondBetween(a, b) ?? throw new ArgumentException($"Atoms {a} and {b} are not bonded.", nameof(b));

    /// <summary>3 for an atom with single bonds only, 2 with one double bond or aromatic, 1 with a triple bond or two double bonds.</summary>
    public int Hybridisation(int atom)
    {
        if (this[atom].IsAromatic)
        {
            return 2;
        }

        int pi = Molecule.BondsOf(atom).Sum(bond => Molecule.Bonds[bond].Order - 1);
        return Math.Max(1, 3 - pi);
    }

    /// <summary>Whether the atom is a carbon with single bonds only.</summary>
    public bool IsSaturatedCarbon(int atom) => this[atom].AtomicNumber == 6 && Hybridisation(atom) == 3;

    /// <summary>What hangs at <paramref name="root"/>, seen from its neighbour <paramref name="from"/>.</summary>
    public Substituent SubstituentAt(int from, int root)
    {
        if (!_substituents.TryGetValue((from, root), out Substituent? known))
        {
            known = SubstituentVocabulary.Name(this, from, root);
            _substituents.Add((from, root), known);
        }

        return known;
    }

    /// <summary>The faces of a ring; null where the structure does not say who is on which.</summary>
    public RingFaces? FacesOf(int ring)
    {
        if (!_faces.TryGetValue(ring, out RingFaces? known))
        {
            known = RingFaces.Of(Molecule, Ring(ring));
            _faces.Add(ring, known);
        }

        return known;
    }

    /// <summary>The chairs of a ring; null where it has none or nothing fixes their balance.</summary>
    public ChairBalance? ChairsOf(int ring)
    {
        if (!_chairs.TryGetValue(ring, out ChairBalance? known))
        {
            known = ChairBalance.Of(this, ring);
            _chairs.Add(ring, known);
        }

        return known;
    }

    /// <summary>Number of bonds on the shortest path between two atoms, or -1 beyond <paramref name="limit"/>.</summary>
    public int Distance(int a, int b, int limit)
    {
        var seen = new HashSet<int> { a };
        ImmutableArray<int> front = [a];
        for (int steps = 0; steps <= limit; steps++)
        {
            if (front.Contains(b))
            {
                return steps;
            }

            front = [.. front.SelectMany(atom => _neighbours[atom]).Where(seen.Add)];
        }

        return -1;
    }
}
