using System.Collections.Immutable;
using Qc.Engine.Prediction.Environments;

namespace Qc.Engine.Prediction;

/// <summary>
/// Protons on non-aromatic unsaturated carbon: whole environments from Data/unsaturated.tsv, else the olefin rule
/// (Pascual, Meier, Simon 1966; Matter et al. 1969): shift = 5.25 + gem + cis + trans.
/// </summary>
internal static class OlefinShifts
{
    private const string GeminalPlace = "gem";
    private const string CisPlace = "cis";
    private const string TransPlace = "trans";
    private const double CentreOfClassPpm = 6.0;
    private static readonly FactTable Increments = FactTable.Load("olefin-increments");
    private static readonly PatternTable Environments = PatternTable.Load("unsaturated");

    /// <summary>Estimates the shift of a proton on an unsaturated carbon; <paramref name="ordinal"/> tells the two of a =CH2 apart.</summary>
    public static ShiftEstimate Estimate(PerceivedMolecule molecule, int carbon, int ordinal)
    {
        if (Environments.FirstAt(molecule, carbon) is { } environment)
        {
            return new ShiftSum(environment).ToEstimate();
        }

        int partner = OlefinGeometry.PartnerOf(molecule, carbon);
        return (partner < 0 ? null : ByIncrements(molecule, carbon, ordinal, partner))
            ?? ShiftEstimate.NotCovered(CentreOfClassPpm, UncertaintyModel.UnsaturatedClassPpm);
    }

    private static ShiftEstimate? ByIncrements(PerceivedMolecule molecule, int carbon, int ordinal, int partner)
    {
        var sum = new ShiftSum(Increments.Facts[0]);
        foreach (int root in OlefinGeometry.SubstituentsOf(molecule, carbon, partner))
        {
            if (Find(molecule, GeminalPlace, carbon, partner, root) is not { } row)
            {
                return null;
            }

            sum.Add(row.Fact, row.IsBorrowed);
        }

        bool hasAcceptors = HasAcceptor(molecule, carbon, partner) && HasAcceptor(molecule, partner, carbon);
        sum.AddUncertainty(hasAcceptors ? UncertaintyModel.TwoAcceptorsPpm : 0);
        ImmutableArray<int> far = OlefinGeometry.SubstituentsOf(molecule, partner, carbon);
        if (far.Select(root => OlefinGeometry.ProtonIsCisTo(molecule, carbon, ordinal, partner, root)).Any(cis => cis is null))
        {
            return Either(molecule, carbon, partner, far, sum);
        }

        foreach (int root in far)
        {
            bool isCis = OlefinGeometry.ProtonIsCisTo(molecule, carbon, ordinal, partner, root) is true;
            if (Find(molecule, isCis ? CisPlace : TransPlace, partner, carbon, root) is not { } row)
            {
                return null;
            }

            sum.Add(row.Fact, row.IsBorrowed);
        }

        return sum.ToEstimate();
    }

    /// <summary>Geometry not stated: the middle of the two, and half their difference as uncertainty.</summary>
    private static ShiftEstimate? Either(PerceivedMolecule molecule, int carbon, int partner, ImmutableArray<int> far, ShiftSum sum)
    {
        double difference = 0;
        double middle = 0;
        foreach (int root in far)
        {
            if (Find(molecule, CisPlace, partner, carbon, root) is not { } cis || Find(molecule, TransPlace, partner, carbon, root) is not { } trans)
            {
                return null;
            }

            middle += 0.5 * (cis.Fact.Value + trans.Fact.Value);
            difference = cis.Fact.Value - trans.Fact.Value - difference;
            sum.Add(cis.Fact with { Value = 0 }, cis.IsBorrowed);
            sum.Add(trans.Fact with { Value = 0, StandardUncertainty = 0 }, trans.IsBorrowed);
        }

        sum.AddUncertainty(UncertaintyModel.NoGeometryPpm);
        sum.AddUncertainty(0.5 * difference);
        ShiftEstimate estimate = sum.ToEstimate();
        return estimate with { ShiftPpm = estimate.ShiftPpm + middle };
    }

    private static (Fact Fact, bool IsBorrowed)? Find(PerceivedMolecule molecule, string place, int carbon, int partner, int root)
    {
        Substituent substituent = molecule.SubstituentAt(carbon, root);
        string variant = substituent.Is("alkyl") && SharesSmallRing(molecule, carbon, partner, root) ? "/ring"
            : IsConjugatedFurther(molecule, carbon, partner, root) ? "/conjugated"
            : "";
        return Increments.Find(place, substituent with
        {
            Names = [.. substituent.Names.SelectMany(name => new[] { name with { Name = name.Name + variant }, name })],
        });
    }

    private static bool HasAcceptor(PerceivedMolecule molecule, int atom, int partner) =>
        OlefinGeometry.SubstituentsOf(molecule, atom, partner).Any(root => molecule.SubstituentAt(atom, root) is var substituent
            && (substituent.Is("COR") || substituent.Is("COOR") || substituent.Is("CONR2") || substituent.Is("CN") || substituent.Is("NO2")));

    private static bool SharesSmallRing(PerceivedMolecule molecule, int carbon, int partner, int root) =>
        molecule.RingsOf(carbon).Intersect(molecule.RingsOf(partner)).Intersect(molecule.RingsOf(root))
            .Any(ring => molecule.Ring(ring).Length is 5 or 6);

    /// <summary>Whether the substituent, or the double bond, is conjugated with something more.</summary>
    private static bool IsConjugatedFurther(PerceivedMolecule molecule, int carbon, int partner, int root) =>
        Others(molecule, carbon, partner, root).Concat(Others(molecule, partner, carbon, root)).Any(atom => IsUnsaturated(molecule, atom))
        || molecule.Neighbours(root)
            .Where(atom => atom != carbon && molecule.BondBetween(root, atom).Order == 1 && molecule[atom].AtomicNumber == 6)
            .Any(atom => IsUnsaturated(molecule, atom))
        || (OlefinGeometry.PartnerOf(molecule, root) is var next and >= 0
            && molecule.Neighbours(next).Any(atom => atom != root && IsUnsaturated(molecule, atom)));

    private static IEnumerable<int> Others(PerceivedMolecule molecule, int atom, int partner, int root) =>
        molecule.Neighbours(atom).Where(other => other != partner && other != root);

    private static bool IsUnsaturated(PerceivedMolecule molecule, int atom) =>
        molecule.Hybridisation(atom) < 3 && molecule[atom].AtomicNumber is 6 or 7 or 16;
}
