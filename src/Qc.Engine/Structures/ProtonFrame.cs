using System.Collections.Immutable;

namespace Qc.Engine.Structures;

/// <summary>Protons on one atom that are the same beyond question, or one of two that may differ.</summary>
/// <param name="Atom">Index of the atom that bears them.</param>
/// <param name="Side">0 or 1 for one of a held pair (see <see cref="StereoPerception.HydrogenPair"/>), else -1.</param>
/// <param name="Count">Number of protons.</param>
/// <param name="Lability">Whether they exchange.</param>
internal sealed record ProtonSite(int Atom, int Side, int Count, Lability Lability);

/// <summary>The proton sites of a molecule, and the questions of symmetry put to it.</summary>
internal sealed class ProtonFrame
{
    private readonly ImmutableArray<SymmetrySearch> _isomers;
    private readonly SymmetryGraph _graph;

    /// <summary>Finds sites and isomers.</summary>
    public ProtonFrame(Molecule molecule)
    {
        Molecule = molecule;
        _graph = new SymmetryGraph(molecule);
        var pairs = molecule.Atoms.Where(atom => atom.HydrogenCount == 2)
            .ToDictionary(atom => atom.Index, atom => (
                StereoPerception.HydrogenPair(molecule, atom.Index, 0), StereoPerception.HydrogenPair(molecule, atom.Index, 1)));
        StereoUnit? PairOf(Spot spot) =>
            !pairs.TryGetValue(spot.Atom, out var pair) ? null : spot.Side == 0 ? pair.Item1 : pair.Item2;

        _isomers = [.. UndrawnIsomers.Of(molecule, _graph).Select(units => new SymmetrySearch(_graph, units, PairOf))];
        var sites = ImmutableArray.CreateBuilder<ProtonSite>();
        foreach (Atom atom in molecule.Atoms.Where(atom => atom.HydrogenCount > 0))
        {
            Lability lability = atom.AtomicNumber is 5 or 6 or 14 or 15 or 32 or 50 ? Lability.Fixed : Lability.Exchangeable;
            StereoUnit? pair = PairOf(new Spot(atom.Index, 0));
            // Two hydrogens on an amine or ammonium nitrogen trade places by exchange; those of CONH2 are held by the C-N bond.
            if (pair is not null && (lability == Lability.Fixed || pair.Shape == StereoShape.Planar))
            {
                sites.Add(new ProtonSite(atom.Index, 0, 1, lability));
                sites.Add(new ProtonSite(atom.Index, 1, 1, lability));
            }
            else
            {
                sites.Add(new ProtonSite(atom.Index, -1, atom.HydrogenCount, lability));
            }
        }

        Sites = sites.ToImmutable();
    }

    /// <summary>The molecule.</summary>
    public Molecule Molecule { get; }

    /// <summary>Sites by atom, then side.</summary>
    public ImmutableArray<ProtonSite> Sites { get; }

    /// <summary>Whether a symmetry carries one site to the other, in every isomer the structure may mean.</summary>
    public bool AreEquivalent(ProtonSite a, ProtonSite b) =>
        a.Lability == b.Lability && a.Side < 0 == b.Side < 0 && _graph.Kinds[a.Atom] == _graph.Kinds[b.Atom]
        && Carries((SpotOf(a), SpotOf(b)));

    /// <summary>Whether, in every isomer, some symmetry makes all these moves at once.</summary>
    public bool Carries(params (Spot From, Spot To)[] moves) => _isomers.All(isomer => isomer.Carries(moves));

    /// <summary>The spot of a site.</summary>
    public static Spot SpotOf(ProtonSite site) => new(site.Atom, site.Side);

    /// <summary>Bonds between two atoms by the shortest way; a large number where there is none.</summary>
    public int Distance(int a, int b)
    {
        const int beyond = 1_000_000;
        if (a == b)
        {
            return 0;
        }

        var seen = new HashSet<int> { a };
        List<int> rim = [a];
        for (int steps = 1; rim.Count > 0; steps++)
        {
            rim = [.. rim.SelectMany(atom => _graph.Edges(atom).Select(edge => edge.Atom)).Where(seen.Add)];
            if (rim.Contains(b))
            {
                return steps;
            }
        }

        return beyond;
    }
}
