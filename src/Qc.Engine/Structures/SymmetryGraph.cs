using System.Collections.Immutable;

namespace Qc.Engine.Structures;

/// <summary>
/// The molecule as symmetry sees it at room temperature: a graph whose nodes carry kinds and whose edges carry bond kinds,
/// with fast processes averaged (common practice in proton NMR).
/// <list type="bullet">
/// <item>Aromatic bonds are one kind; so are the bonds of an acid's oxygens (=O, OH, O-), whose proton moves.</item>
/// <item>The nitrogens of an NH azole ring, and those of an amidine or guanidine with a hydrogen, exchange that hydrogen.</item>
/// </list>
/// </summary>
internal sealed class SymmetryGraph
{
    private const int AromaticBond = 4;
    private const int AveragedBond = 5;

    private readonly ImmutableArray<ImmutableArray<(int Atom, int Kind)>> _edges;

    /// <summary>Builds the graph.</summary>
    public SymmetryGraph(Molecule molecule)
    {
        var averaged = new bool[molecule.Atoms.Length];
        var averagedBonds = new HashSet<int>();
        foreach (Atom atom in molecule.Atoms)
        {
            AverageAcid(molecule, atom.Index, averaged, averagedBonds);
            AverageAmidine(molecule, atom.Index, averaged, averagedBonds);
        }

        AverageAzoles(molecule, averaged);
        _edges = [.. molecule.Atoms.Select(atom => molecule.BondsOf(atom.Index)
            .Select(bond => (molecule.Other(bond, atom.Index), BondKind(molecule.Bonds[bond], averagedBonds.Contains(bond))))
            .ToImmutableArray())];
        var kinds = molecule.Atoms.Select(atom => Kind(molecule, atom, averaged[atom.Index])).ToArray();
        var ranks = kinds.Distinct().Order().Select((kind, rank) => (kind, rank)).ToDictionary(entry => entry.kind, entry => entry.rank);
        Components = ComponentsOf();
        Kinds = Refined([.. kinds.Select(kind => ranks[kind])]);
    }

    /// <summary>
    /// Kind of each node: element, isotope, charge, hydrogens and degree, of it and in the same way of all its surroundings.
    /// Nodes of different kind are related by no symmetry; arrangement in space is not looked at.
    /// </summary>
    public ImmutableArray<int> Kinds { get; }

    /// <summary>Nodes of each connected component, ascending.</summary>
    public ImmutableArray<ImmutableArray<int>> Components { get; }

    /// <summary>Neighbours of a node with the kind of bond.</summary>
    public ImmutableArray<(int Atom, int Kind)> Edges(int atom) => _edges[atom];

    /// <summary>The component a node belongs to.</summary>
    public ImmutableArray<int> ComponentOf(int atom) => Components.First(component => component.Contains(atom));

    private ImmutableArray<int> Refined(int[] kinds)
    {
        int[] copy = [.. kinds];
        var bare = new SymmetrySearch.Side(this, [.. Enumerable.Range(0, kinds.Length)], [], mirrored: false);
        Refinement.Run(bare, bare, kinds, copy);
        return [.. kinds];
    }

    private static (int Element, int Isotope, int Charge, int Hydrogens, int Degree, bool Aromatic) Kind(
        Molecule molecule, Atom atom, bool averaged) =>
        (atom.AtomicNumber, atom.Isotope, averaged ? 0 : atom.FormalCharge, averaged ? -1 : atom.HydrogenCount,
            molecule.BondsOf(atom.Index).Length, atom.IsAromatic);

    private static int BondKind(Bond bond, bool averaged) =>
        averaged ? AveragedBond : bond.IsAromatic ? AromaticBond : bond.Order;

    // Oxygens that end on one atom, at least one of them doubly bonded: carboxyl, nitro, sulfonic, phosphoric.
    private static void AverageAcid(Molecule molecule, int centre, bool[] averaged, HashSet<int> averagedBonds)
    {
        int[] ends = [.. molecule.BondsOf(centre).Where(bond =>
            molecule.Atoms[molecule.Other(bond, centre)] is { AtomicNumber: 8 } oxygen && molecule.BondsOf(oxygen.Index).Length == 1)];
        if (ends.Length < 2 || ends.All(bond => molecule.Bonds[bond].Order != 2))
        {
            return;
        }

        foreach (int bond in ends)
        {
            averaged[molecule.Other(bond, centre)] = true;
            averagedBonds.Add(bond);
        }
    }

    private static void AverageAmidine(Molecule molecule, int centre, bool[] averaged, HashSet<int> averagedBonds)
    {
        if (molecule.Atoms[centre] is not { AtomicNumber: 6, IsAromatic: false })
        {
            return;
        }

        int[] nitrogens = [.. molecule.BondsOf(centre).Where(bond => molecule.Atoms[molecule.Other(bond, centre)].AtomicNumber == 7)];
        int[] mobile = [.. nitrogens.Where(bond =>
            molecule.Bonds[bond].Order == 2 || molecule.Atoms[molecule.Other(bond, centre)].HydrogenCount > 0)];
        bool doubled = mobile.Any(bond => molecule.Bonds[bond].Order == 2);
        bool bearing = mobile.Any(bond => molecule.Atoms[molecule.Other(bond, centre)].HydrogenCount > 0);
        if (mobile.Length < 2 || !doubled || !bearing)
        {
            return;
        }

        foreach (int bond in mobile)
        {
            averaged[molecule.Other(bond, centre)] = true;
            averagedBonds.Add(bond);
        }
    }

    private static void AverageAzoles(Molecule molecule, bool[] averaged)
    {
        foreach (ImmutableArray<int> ring in molecule.Rings.Where(ring => ring.Length == 5 && ring.All(i => molecule.Atoms[i].IsAromatic)))
        {
            Atom[] nitrogens = [.. ring.Select(i => molecule.Atoms[i])
                .Where(atom => atom is { AtomicNumber: 7, FormalCharge: 0 } && molecule.BondsOf(atom.Index).Length == 2)];
            if (nitrogens.Any(atom => atom.HydrogenCount == 1))
            {
                foreach (Atom atom in nitrogens)
                {
                    averaged[atom.Index] = true;
                }
            }
        }
    }

    private ImmutableArray<ImmutableArray<int>> ComponentsOf()
    {
        var components = new List<ImmutableArray<int>>();
        var seen = new bool[_edges.Length];
        for (int start = 0; start < _edges.Length; start++)
        {
            if (seen[start])
            {
                continue;
            }

            seen[start] = true;
            var found = new List<int> { start };
            for (int i = 0; i < found.Count; i++)
            {
                foreach ((int next, _) in _edges[found[i]])
                {
                    if (!seen[next])
                    {
                        seen[next] = true;
                        found.Add(next);
                    }
                }
            }

            found.Sort();
            components.Add([.. found]);
        }

        return [.. components];
    }
}
