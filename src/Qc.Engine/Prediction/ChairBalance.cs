using System.Collections.Immutable;
using Qc.Engine.Prediction.Environments;
using Qc.Engine.Structures;

namespace Qc.Engine.Prediction;

/// <summary>
/// The two chairs of a saturated six-membered ring and how much of each there is.
/// </summary>
/// <remarks>
/// Notation: A, the free energy of a substituent axial minus equatorial (Data/conformational-energies.tsv); E, the sum over the
/// axial substituents of a chair. Rule: the share of the first chair is 1 / (1 + exp((E1 - E2) / RT)); energies add, but two
/// carbon or hetero substituents axial on the same face repel, and two equatorial neighbours crowd each other
/// (Eliel, Wilen, Mander 1994, from memory). A substituent on a ring nitrogen is taken as equatorial, as nitrogen inverts.
/// </remarks>
internal sealed class ChairBalance
{
    private const double RoomTemperatureKcal = 0.593;
    private const double SynDiaxialKcal = 2.0;
    private const double EquatorialNeighboursKcal = 0.5;
    private const double AnomericKcal = -1.0;
    private const double AnomericSpreadKcal = 0.5;
    private const double SumSpreadKcal = 0.3;
    private static readonly FactTable Energies = FactTable.Load("conformational-energies");

    private readonly ImmutableArray<int> _ring;
    private readonly RingFaces _faces;

    private ChairBalance(ImmutableArray<int> ring, RingFaces faces, double share, double shareUncertainty)
    {
        _ring = ring;
        _faces = faces;
        FirstShare = share;
        ShareUncertainty = shareUncertainty;
    }

    /// <summary>Share of the first chair, in which "up" is axial on the ring's first, third and fifth atom; 0 to 1.</summary>
    public double FirstShare { get; }

    /// <summary>Standard uncertainty of <see cref="FirstShare"/>.</summary>
    public double ShareUncertainty { get; }

    /// <summary>The balance; null for other rings, fused and bridged ones, rings without a substituent, or where the structure or the table says too little.</summary>
    public static ChairBalance? Of(PerceivedMolecule molecule, int ring)
    {
        ImmutableArray<int> atoms = molecule.Ring(ring);
        if (atoms.Length != 6 || !atoms.All(atom => IsChairAtom(molecule, atoms, atom)) || atoms.Count(atom => molecule.Hybridisation(atom) < 3) > 1
            || molecule.FacesOf(ring) is not { } faces)
        {
            return null;
        }

        ImmutableArray<(int Place, int Root, bool IsUp)> substituents =
            [.. atoms.SelectMany((atom, place) => OutsideOf(molecule, atoms, atom).Select(root => (place, root, faces.IsUp(atom, root))))
                .Where(entry => molecule.IsSaturatedCarbon(atoms[entry.place]))];
        if (substituents.IsEmpty)
        {
            return null;
        }

        double difference = 0;
        double variance = SumSpreadKcal * SumSpreadKcal;
        foreach ((int place, int root, bool isUp) in substituents)
        {
            if (Energies.Find("A", molecule.SubstituentAt(atoms[place], root)) is not { } row || IsStrained(molecule, atoms, place))
            {
                return null;
            }

            bool isAnomeric = molecule[root].AtomicNumber != 6 && Beside(atoms, place).Any(atom => molecule[atom].AtomicNumber is 7 or 8 or 16);
            difference += (isUp == IsEven(place) ? 1 : -1) * (row.Fact.Value + (isAnomeric ? AnomericKcal : 0));
            double spread = double.Hypot(row.Fact.StandardUncertainty, isAnomeric ? AnomericSpreadKcal : 0);
            variance += spread * spread;
        }

        difference += Crowding(substituents, inFirst: true) - Crowding(substituents, inFirst: false);
        double share = 1 / (1 + Math.Exp(difference / RoomTemperatureKcal));
        return new ChairBalance(atoms, faces, share, share * (1 - share) / RoomTemperatureKcal * Math.Sqrt(variance));
    }

    /// <summary>Whether a proton is axial in the first chair (and so equatorial in the second); null where it has no fixed face.</summary>
    public bool? IsAxialInFirst(Atom atom, int side) =>
        _faces.IsProtonUp(atom, side) is { } isUp ? isUp == IsEven(_ring.IndexOf(atom.Index)) : null;

    // Saturated and in no other ring; or a ketone's carbon. Lactones and lactams are no chairs.
    private static bool IsChairAtom(PerceivedMolecule molecule, ImmutableArray<int> ring, int atom)
    {
        if (molecule.RingsOf(atom).Length != 1 || molecule[atom].IsAromatic || molecule[atom].AtomicNumber is not (6 or 7 or 8 or 16))
        {
            return false;
        }

        return molecule.Hybridisation(atom) == 3
            || (molecule[atom].AtomicNumber == 6
                && OutsideOf(molecule, ring, atom).All(other => molecule[other].AtomicNumber == 8)
                && molecule.Neighbours(atom).Where(ring.Contains).All(molecule.IsSaturatedCarbon));
    }

    // Beside a flat nitrogen a substituent goes axial to keep clear of what the nitrogen bears.
    private static bool IsStrained(PerceivedMolecule molecule, ImmutableArray<int> ring, int place) => Beside(ring, place)
        .Where(atom => molecule[atom].AtomicNumber == 7)
        .Any(nitrogen => OutsideOf(molecule, ring, nitrogen).Any(root => molecule.Hybridisation(root) < 3 || molecule[root].AtomicNumber == 16));

    private static IEnumerable<int> OutsideOf(PerceivedMolecule molecule, ImmutableArray<int> ring, int atom) =>
        molecule.Neighbours(atom).Where(other => !ring.Contains(other));

    private static ImmutableArray<int> Beside(ImmutableArray<int> ring, int place) => [ring[(place + 5) % 6], ring[(place + 1) % 6]];

    private static double Crowding(ImmutableArray<(int Place, int Root, bool IsUp)> substituents, bool inFirst)
    {
        double energy = 0;
        for (int i = 0; i < substituents.Length; i++)
        {
            for (int j = 0; j < i; j++)
            {
                bool isAxialI = substituents[i].IsUp == IsEven(substituents[i].Place) == inFirst;
                bool isAxialJ = substituents[j].IsUp == IsEven(substituents[j].Place) == inFirst;
                int apart = Math.Abs(substituents[i].Place - substituents[j].Place);
                energy += isAxialI && isAxialJ && apart is (2 or 4) ? SynDiaxialKcal : 0;
                energy += !isAxialI && !isAxialJ && apart is (1 or 5) ? EquatorialNeighboursKcal : 0;
            }
        }

        return energy;
    }

    private static bool IsEven(int place) => place % 2 == 0;
}
