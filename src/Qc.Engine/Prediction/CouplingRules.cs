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

    private static Rule? Of(
        PerceivedMolecule molecule, ProtonSet setA, ProtonGroup groupA, ProtonSet setB, ProtonGroup groupB, string solvent)
    {
        (int a, int b, int distance) = NearestAtoms(molecule, setA, setB);
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

        bool isHindered = groupA.DiastereotopicPartner >= 0 || groupB.DiastereotopicPartner >= 0;
        return (distance == 1 && isHindered ? First(molecule, a, b, Hindered) : null) ?? First(molecule, a, b, Anywhere);
    }

    private static Rule? AcrossDoubleBond(PerceivedMolecule molecule, int a, int ordinalA, int b, int ordinalB)
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

    private static Rule? First(PerceivedMolecule molecule, int a, int b, string place)
    {
        foreach (PatternFact row in Rules.Rows.Where(row => row.Fact.Place == place))
        {
            if (Joins(molecule, row.Pattern, a, b) || Joins(molecule, row.Pattern, b, a))
            {
                return new Rule(row.Fact.Value, row.Fact.StandardUncertainty, row.Pattern.Span + BondsToProtons, row.Fact.Id);
            }
        }

        return null;
    }

    private static bool Joins(PerceivedMolecule molecule, EnvironmentPattern pattern, int from, int to) =>
        pattern.End < 0
            ? from == to && pattern.IsAt(molecule, from)
            : pattern.Matches(molecule, from).Any(match => match[pattern.End] == to);

    private static (int A, int B, int Distance) NearestAtoms(PerceivedMolecule molecule, ProtonSet setA, ProtonSet setB)
    {
        (int A, int B, int Distance) nearest = (-1, -1, -1);
        foreach (int a in setA.Atoms)
        {
            foreach (int b in setB.Atoms)
            {
                int distance = molecule.Distance(a, b, FarthestAtoms);
                if (distance >= 0 && (nearest.Distance < 0 || distance < nearest.Distance))
                {
                    nearest = (a, b, distance);
                }
            }
        }

        return nearest;
    }

    private sealed record Rule(double Hertz, double StandardUncertaintyHertz, int Bonds, string Row);
}
