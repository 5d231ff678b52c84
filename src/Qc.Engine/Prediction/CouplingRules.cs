using System.Collections.Immutable;
using Qc.Engine.Prediction.Environments;
using Qc.Engine.Structures;

namespace Qc.Engine.Prediction;

/// <summary>
/// Couplings between proton sets from Data/couplings.tsv. A set's protons all couple alike to another set, so one pair of atoms
/// stands for the pair of sets; pairs of sets of the same two groups by the same row are one constant.
/// OH and NH are left uncoupled (fast exchange) except in DMSO-d6, where exchange is usually slow.
/// </summary>
internal static class CouplingRules
{
    private const double SmallestHertz = 0.4;
    private const int FarthestAtoms = 3;
    private const int BondsToProtons = 2;
    private const string Geminal = "gem";
    private const string Cis = "cis";
    private const string Trans = "trans";
    private const string Hindered = "hindered";
    private const string Anywhere = "-";
    private const string SlowExchangeSolvent = "DMSO-d6";
    private static readonly PatternTable Rules = PatternTable.Load("couplings");

    /// <summary>All couplings of at least 0.4 Hz, ordered by set.</summary>
    public static ImmutableArray<ExpectedCoupling> Between(PerceivedMolecule molecule, ProtonGroups protons, string solvent)
    {
        var found = ImmutableArray.CreateBuilder<ExpectedCoupling>();
        var parameters = new Dictionary<(int, int, string, double), int>();
        for (int a = 0; a < protons.Sets.Length; a++)
        {
            for (int b = a + 1; b < protons.Sets.Length; b++)
            {
                (ProtonSet setA, ProtonSet setB) = (protons.Sets[a], protons.Sets[b]);
                (ProtonGroup groupA, ProtonGroup groupB) = (protons.Groups[setA.Group], protons.Groups[setB.Group]);
                if (Of(molecule, setA, groupA, setB, groupB, solvent) is not { } rule || Math.Abs(rule.Hertz) < SmallestHertz)
                {
                    continue;
                }

                var constant = (Math.Min(setA.Group, setB.Group), Math.Max(setA.Group, setB.Group), rule.Row, rule.Hertz);
                if (!parameters.TryGetValue(constant, out int parameter))
                {
                    parameter = parameters.Count;
                    parameters.Add(constant, parameter);
                }

                found.Add(new ExpectedCoupling(a, b, rule.Hertz, rule.StandardUncertaintyHertz, rule.Bonds, parameter, rule.Row));
            }
        }

        return found.ToImmutable();
    }

    private static RuledCoupling? Of(
        PerceivedMolecule molecule, ProtonSet setA, ProtonGroup groupA, ProtonSet setB, ProtonGroup groupB, string solvent)
    {
        (int a, int sideA, int b, int sideB, int distance) = NearestAtoms(molecule, setA, setB);
        bool exchanges = groupA.Lability == Lability.Exchangeable || groupB.Lability == Lability.Exchangeable;
        if (distance < 0 || (exchanges && solvent != SlowExchangeSolvent))
        {
            return null;
        }

        if (distance == 0)
        {
            return First(molecule, a, a, Geminal);
        }

        if (exchanges)
        {
            return First(molecule, a, b, SlowExchangeSolvent);
        }

        if (distance == 1 && OlefinGeometry.PartnerOf(molecule, a) == b)
        {
            return AcrossDoubleBond(molecule, a, Predictor.OrdinalOf(groupA), b, Predictor.OrdinalOf(groupB));
        }

        if (distance == 1 && RingCouplings.Between(molecule, a, sideA, b, sideB) is { } onRing)
        {
            return onRing;
        }

        bool isHindered = groupA.DiastereotopicPartner >= 0 || groupB.DiastereotopicPartner >= 0;
        return (distance == 1 && isHindered ? First(molecule, a, b, Hindered) : null) ?? First(molecule, a, b, Anywhere);
    }

    private static RuledCoupling? AcrossDoubleBond(PerceivedMolecule molecule, int a, int ordinalA, int b, int ordinalB)
    {
        if (OlefinGeometry.ProtonsAreCis(molecule, a, ordinalA, b, ordinalB) is { } areCis)
        {
            return First(molecule, a, b, areCis ? Cis : Trans);
        }

        return First(molecule, a, b, Cis) is { } cis && First(molecule, a, b, Trans) is { } trans
            ? cis with
            {
                Hertz = 0.5 * (cis.Hertz + trans.Hertz),
                StandardUncertaintyHertz = cis.StandardUncertaintyHertz + (0.5 * Math.Abs(trans.Hertz - cis.Hertz)),
                Row = $"{cis.Row}|{trans.Row}",
            }
            : null;
    }

    /// <summary>The first row of a place that joins two atoms, written from either.</summary>
    internal static RuledCoupling? First(PerceivedMolecule molecule, int a, int b, string place) =>
        FirstWhere(place, row => Joins(molecule, row, a, b) || Joins(molecule, row, b, a));

    /// <summary>The first row of a place that joins two atoms, written from the first.</summary>
    internal static RuledCoupling? FirstFrom(PerceivedMolecule molecule, int from, int to, string place) =>
        FirstWhere(place, row => Joins(molecule, row, from, to));

    private static RuledCoupling? FirstWhere(string place, Func<EnvironmentPattern, bool> joins) =>
        Rules.Rows.FirstOrDefault(row => row.Fact.Place == place && joins(row.Pattern)) is { } row
            ? new RuledCoupling(row.Fact.Value, row.Fact.StandardUncertainty, row.Pattern.Span + BondsToProtons, row.Fact.Id)
            : null;

    private static bool Joins(PerceivedMolecule molecule, EnvironmentPattern pattern, int from, int to) =>
        pattern.End < 0
            ? from == to && pattern.IsAt(molecule, from)
            : pattern.Matches(molecule, from).Any(match => match[pattern.End] == to);

    private static (int A, int SideA, int B, int SideB, int Distance) NearestAtoms(PerceivedMolecule molecule, ProtonSet setA, ProtonSet setB)
    {
        (int A, int SideA, int B, int SideB, int Distance) nearest = (-1, -1, -1, -1, -1);
        for (int i = 0; i < setA.Atoms.Length; i++)
        {
            for (int j = 0; j < setB.Atoms.Length; j++)
            {
                int distance = molecule.Distance(setA.Atoms[i], setB.Atoms[j], FarthestAtoms);
                if (distance >= 0 && (nearest.Distance < 0 || distance < nearest.Distance))
                {
                    nearest = (setA.Atoms[i], setA.SideAt(i), setB.Atoms[j], setB.SideAt(j), distance);
                }
            }
        }

        return nearest;
    }
}

/// <summary>What a row, or several, say of a coupling.</summary>
internal sealed record RuledCoupling(double Hertz, double StandardUncertaintyHertz, int Bonds, string Row);
