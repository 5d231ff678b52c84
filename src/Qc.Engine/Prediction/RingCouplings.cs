using System.Collections.Immutable;
using Qc.Engine.Prediction.Environments;

namespace Qc.Engine.Prediction;

/// <summary>
/// Vicinal couplings where the ring fixes the angle: on three-membered rings by face, on chairs by axial and equatorial place,
/// weighted by the shares of the two chairs. J = p J1 + (1 - p) J2; its uncertainty has those of J1 and J2, weighted alike, and
/// |J1 - J2| times that of p.
/// </summary>
internal static class RingCouplings
{
    private const string Axial = "axial-axial";
    private const string Mixed = "axial-equatorial";
    private const string Equatorial = "equatorial-equatorial";
    private const string RingCis = "ring-cis";
    private const string RingTrans = "ring-trans";
    private const double OneChairShare = 0.95;

    /// <summary>The coupling between protons on neighbouring ring carbons, or null where the ring does not fix it.</summary>
    /// <param name="molecule">The molecule.</param>
    /// <param name="a">One carbon.</param>
    /// <param name="sideA">Which of its two protons; -1 where it bears one.</param>
    /// <param name="b">The carbon beside it.</param>
    /// <param name="sideB">Which of its protons.</param>
    public static RuledCoupling? Between(PerceivedMolecule molecule, int a, int sideA, int b, int sideB)
    {
        foreach (int ring in molecule.RingsOf(a).Intersect(molecule.RingsOf(b)))
        {
            ImmutableArray<int> atoms = molecule.Ring(ring);
            RuledCoupling? rule = atoms.Length switch
            {
                3 => OnThree(molecule, ring, a, sideA, b, sideB),
                6 => OnChair(molecule, ring, a, sideA, b, sideB),
                _ => null,
            };
            if (rule is not null)
            {
                return rule;
            }
        }

        return null;
    }

    private static RuledCoupling? OnThree(PerceivedMolecule molecule, int ring, int a, int sideA, int b, int sideB) =>
        molecule.FacesOf(ring) is { } faces
        && faces.IsProtonUp(molecule[a], sideA) is { } isUpA && faces.IsProtonUp(molecule[b], sideB) is { } isUpB
            ? CouplingRules.First(molecule, a, b, isUpA == isUpB ? RingCis : RingTrans)
            : null;

    private static RuledCoupling? OnChair(PerceivedMolecule molecule, int ring, int a, int sideA, int b, int sideB)
    {
        if (molecule.ChairsOf(ring) is not { } chairs
            || chairs.IsAxialInFirst(molecule[a], sideA) is not { } isAxialA
            || chairs.IsAxialInFirst(molecule[b], sideB) is not { } isAxialB
            || InChair(molecule, a, isAxialA, b, isAxialB) is not { } first
            || InChair(molecule, a, !isAxialA, b, !isAxialB) is not { } second)
        {
            return null;
        }

        double share = chairs.FirstShare;
        double own = (share * first.StandardUncertaintyHertz) + ((1 - share) * second.StandardUncertaintyHertz);
        double balance = Math.Abs(first.Hertz - second.Hertz) * chairs.ShareUncertainty;
        return first with
        {
            Hertz = (share * first.Hertz) + ((1 - share) * second.Hertz),
            StandardUncertaintyHertz = double.Hypot(own, balance),
            Row = share > OneChairShare ? first.Row : share < 1 - OneChairShare ? second.Row : $"{first.Row}|{second.Row}",
        };
    }

    private static RuledCoupling? InChair(PerceivedMolecule molecule, int a, bool isAxialA, int b, bool isAxialB) => (isAxialA, isAxialB) switch
    {
        (true, true) => CouplingRules.First(molecule, a, b, Axial),
        (false, false) => CouplingRules.First(molecule, a, b, Equatorial),
        (true, false) => CouplingRules.FirstFrom(molecule, a, b, Mixed),
        _ => CouplingRules.FirstFrom(molecule, b, a, Mixed),
    };
}
