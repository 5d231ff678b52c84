using System.Collections.Immutable;
using Qc.Engine.Prediction.Environments;

namespace Qc.Engine.Prediction;

/// <summary>
/// Protons on aromatic carbon: benzenes by base + ortho + meta + para increments; other rings from the parent's shift in
/// Data/aromatic-bases.tsv plus benzene increments of the substituents on the same ring, which are less certain there.
/// </summary>
internal static class AromaticShifts
{
    private const double CentreOfClassPpm = 7.5;
    private static readonly FactTable Benzene = FactTable.Load("benzene-increments");
    private static readonly PatternTable Bases = PatternTable.Load("aromatic-bases");
    private const string Ortho = "ortho";
    private const string PeriPlace = "peri";
    private const string TwistedPlace = "ortho-twisted";
    private static readonly ImmutableArray<string> PlaceAtDistance = ["", Ortho, "meta", "para"];

    /// <summary>Estimates the shift of a proton on an aromatic carbon.</summary>
    public static ShiftEstimate Estimate(PerceivedMolecule molecule, int carbon)
    {
        ImmutableArray<ImmutableArray<int>> rings =
            [.. molecule.RingsOf(carbon).Select(molecule.Ring).Where(ring => ring.All(atom => molecule[atom].IsAromatic))];
        if (rings.IsEmpty)
        {
            return ShiftEstimate.NotCovered(CentreOfClassPpm, UncertaintyModel.UnsaturatedClassPpm);
        }

        bool isBenzene = rings.Length == 1 && rings[0].All(atom => molecule[atom].AtomicNumber == 6 && !IsFusedAromatic(molecule, atom));
        Fact? parent = isBenzene ? Benzene.Facts[0] : Bases.FirstAt(molecule, carbon);
        if (parent is null)
        {
            return ShiftEstimate.NotCovered(CentreOfClassPpm, UncertaintyModel.UnsaturatedClassPpm);
        }

        var sum = new ShiftSum(parent);
        foreach (ImmutableArray<int> ring in rings)
        {
            sum.AddUncertainty(IsPushPull(molecule, ring) ? UncertaintyModel.PushPullPpm : 0);
            if (!AddSubstituents(molecule, carbon, ring, isBenzene, sum))
            {
                return ShiftEstimate.NotCovered(CentreOfClassPpm, UncertaintyModel.UnsaturatedClassPpm);
            }
        }

        AddPeri(molecule, carbon, sum);
        return sum.ToEstimate();
    }

    private static bool AddSubstituents(PerceivedMolecule molecule, int carbon, ImmutableArray<int> ring, bool isBenzene, ShiftSum sum)
    {
        int start = ring.IndexOf(carbon);
        for (int step = 1; step < ring.Length; step++)
        {
            int atom = ring[(start + step) % ring.Length];
            string place = PlaceAtDistance[Math.Min(3, Math.Min(step, ring.Length - step))];
            foreach (int root in Exocyclic(molecule, atom))
            {
                if (molecule[atom].AtomicNumber != 6)
                {
                    sum.AddUncertainty(UncertaintyModel.OtherRingPpm);
                    continue;
                }

                Substituent substituent = molecule.SubstituentAt(atom, root);
                (Fact Fact, bool IsBorrowed)? twisted = place == Ortho && IsTwisted(molecule, atom, root) ? Benzene.Find(TwistedPlace, substituent) : null;
                if ((twisted ?? Benzene.Find(place, substituent)) is not { } row)
                {
                    return false;
                }

                sum.Add(row.Fact, row.IsBorrowed, isBenzene ? 0 : UncertaintyModel.OtherRingPpm);
            }

            int next = ring[(start + step + 1) % ring.Length];
            bool isOrthoPair = next != carbon && Exocyclic(molecule, atom).Any() && Exocyclic(molecule, next).Any();
            sum.AddUncertainty(isOrthoPair ? UncertaintyModel.OrthoPairPpm : 0);
        }

        return true;
    }

    /// <summary>Atoms singly bonded to a ring atom from outside its aromatic rings; a doubly bonded oxygen is part of the parent.</summary>
    private static IEnumerable<int> Exocyclic(PerceivedMolecule molecule, int atom) =>
        molecule.Neighbours(atom).Where(other => molecule.BondBetween(atom, other) is { IsAromatic: false, Order: 1 });

    /// <summary>Whether an acceptor has another beside it, so that at most one of them lies in the plane of the ring.</summary>
    private static bool IsTwisted(PerceivedMolecule molecule, int atom, int root) => IsAcceptor(molecule, root)
        && molecule.Neighbours(atom)
            .Where(next => next != root)
            .Any(next => Exocyclic(molecule, next).Any(other => IsAcceptor(molecule, other)));

    private static bool IsAcceptor(PerceivedMolecule molecule, int root) =>
        molecule[root].AtomicNumber is 6 or 7
        && molecule.Molecule.BondsOf(root).Any(bond => molecule.Molecule.Bonds[bond].Order == 2 && molecule[molecule.Molecule.Other(bond, root)].AtomicNumber == 8);

    private static void AddPeri(PerceivedMolecule molecule, int carbon, ShiftSum sum)
    {
        foreach (int junction in molecule.Neighbours(carbon).Where(atom => IsFusedAromatic(molecule, atom)))
        {
            foreach (int peri in molecule.Neighbours(junction).Where(atom => atom != carbon && !IsFusedAromatic(molecule, atom)))
            {
                foreach (int root in Exocyclic(molecule, peri))
                {
                    if (Benzene.Find(PeriPlace, molecule.SubstituentAt(peri, root)) is { } row)
                    {
                        sum.Add(row.Fact, row.IsBorrowed);
                    }
                    else
                    {
                        sum.AddUncertainty(UncertaintyModel.PeriPpm);
                    }
                }
            }
        }
    }

    private static bool IsPushPull(PerceivedMolecule molecule, ImmutableArray<int> ring)
    {
        ImmutableArray<(int Root, Substituent Substituent)> substituents =
            [.. ring.SelectMany(atom => Exocyclic(molecule, atom).Select(root => (root, molecule.SubstituentAt(atom, root))))];
        return substituents.Any(entry => entry.Substituent.Is("NR2"))
            && substituents.Count(entry => IsDonor(entry.Substituent) || IsAcceptor(molecule, entry.Root)) > 1;
    }

    private static bool IsDonor(Substituent substituent) => substituent.Is("NR2") || substituent.Is("OH") || substituent.Is("OR");

    private static bool IsFusedAromatic(PerceivedMolecule molecule, int atom) =>
        molecule.RingsOf(atom).Count(ring => molecule.Ring(ring).All(member => molecule[member].IsAromatic)) > 1;
}
