using System.Collections.Immutable;
using Qc.Engine.Prediction.Environments;

namespace Qc.Engine.Prediction;

/// <summary>
/// Protons on saturated carbon: the nearest measured parent plus increments for what it lacks, combined with up to three additive schemes.
/// </summary>
/// <remarks>
/// Notation: alpha, a substituent on the carbon that bears the protons; beta, one carbon further; gamma, two.
/// Scheme A (BM97): base + alpha + beta + gamma. Scheme B (Shoolery, FR84): 0.23 + constants of the substituents, for two or three;
/// beta from scheme A. Scheme C (Curphy and Morrison): as A, with values of their own for CH3, CH2 and CH.
/// </remarks>
internal static class SaturatedShifts
{
    private const string Alkyl = "alkyl";
    private const double VarianceTolerance = 1e-9;
    private static readonly FactTable SchemeA = FactTable.Load("alkyl-increments");
    private static readonly FactTable SchemeB = FactTable.Load("methylene-constants");
    private static readonly FactTable SchemeC = FactTable.Load("methine-constants");
    private static readonly PatternTable Parents = PatternTable.Load("parents");

    /// <summary>Estimates the shift of the protons on a saturated carbon.</summary>
    public static ShiftEstimate Estimate(PerceivedMolecule molecule, int carbon)
    {
        ImmutableArray<Influence> influences = Influence.On(molecule, carbon);
        ImmutableArray<ShiftEstimate?> estimates =
        [
            ByParent(molecule, carbon, influences),
            BySchemeA(molecule, carbon, influences),
            BySchemeB(molecule, carbon, influences),
            BySchemeC(molecule, carbon, influences),
        ];
        ImmutableArray<ShiftEstimate> known = [.. estimates.OfType<ShiftEstimate>()];
        return known.IsEmpty
            ? ShiftEstimate.NotCovered(CentreOfClass(molecule, carbon), UncertaintyModel.SaturatedClassPpm)
            : ShiftEstimate.Combine(known);
    }

    /// <summary>Scheme A alone: the published sum, or null where a substituent is not in it.</summary>
    internal static ShiftEstimate? BySchemeA(PerceivedMolecule molecule, int carbon, ImmutableArray<Influence> influences)
    {
        if (SchemeA.Find("base", KindOf(molecule, carbon)) is not { } start)
        {
            return null;
        }

        var sum = new ShiftSum(start);
        int strong = 0;
        foreach (Influence influence in influences)
        {
            if (SchemeA.Find(influence.Place, influence.Substituent) is not { } row)
            {
                return null;
            }

            bool stacked = influence.Place == Influence.Alpha && IsStrong(influence) && strong++ > 0;
            Add(sum, row, stacked);
        }

        sum.AddUncertainty(UncertaintyModel.NoParentPpm);
        sum.AddUncertainty(molecule[carbon].HydrogenCount == 1 && strong > 0 ? UncertaintyModel.MethinePpm : 0);
        sum.AddUncertainty(molecule.RingsOf(carbon).Length > 0 ? UncertaintyModel.UnknownRingPpm : 0);
        sum.AddUncertainty(CrowdingPpm(influences));
        return sum.ToEstimate();
    }

    /// <summary>Scheme B alone, for CH2 and CH; null for CH3 or where a constant is missing.</summary>
    internal static ShiftEstimate? BySchemeB(PerceivedMolecule molecule, int carbon, ImmutableArray<Influence> influences)
    {
        if (molecule[carbon].HydrogenCount is not (1 or 2) || molecule.RingsOf(carbon).Length > 0)
        {
            return null;
        }

        var sum = new ShiftSum(SchemeB.Facts[0]);
        foreach (Influence influence in influences)
        {
            (FactTable table, string place) = influence.Place == Influence.Alpha ? (SchemeB, Influence.Alpha) : (SchemeA, influence.Place);
            if (table.Find(place, influence.Substituent) is not { } row)
            {
                return null;
            }

            if (row.Fact.Value != 0)
            {
                sum.Add(row.Fact, row.IsBorrowed);
            }
        }

        sum.AddUncertainty(UncertaintyModel.NoParentPpm);
        sum.AddUncertainty(molecule[carbon].HydrogenCount == 1 ? UncertaintyModel.ThreeConstantsPpm : 0);
        sum.AddUncertainty(CrowdingPpm(influences));
        return sum.ToEstimate();
    }

    private static ShiftEstimate? BySchemeC(PerceivedMolecule molecule, int carbon, ImmutableArray<Influence> influences)
    {
        string kind = KindOf(molecule, carbon);
        if (molecule.RingsOf(carbon).Length > 0 || SchemeC.Find("base", kind) is not { } start)
        {
            return null;
        }

        var sum = new ShiftSum(start);
        int strong = 0;
        foreach (Influence influence in influences.Where(influence => influence.Place != Influence.Gamma))
        {
            if (SchemeC.Find($"{influence.Place}-{kind}", influence.Substituent) is not { } row)
            {
                return null;
            }

            bool stacked = influence.Place == Influence.Alpha && IsStrong(influence) && strong++ > 0;
            Add(sum, row, stacked);
        }

        sum.AddUncertainty(UncertaintyModel.NoParentPpm);
        sum.AddUncertainty(CrowdingPpm(influences));
        return sum.ToEstimate();
    }

    /// <summary>The parent that leaves least to add; of equals, the one that says most; of these, the first.</summary>
    private static ShiftEstimate? ByParent(PerceivedMolecule molecule, int carbon, ImmutableArray<Influence> influences)
    {
        (ShiftSum Sum, double Added, int Detail)? best = null;
        foreach (PatternFact parent in Parents.Rows)
        {
            foreach (ImmutableArray<int> match in parent.Pattern.Matches(molecule, carbon))
            {
                if (WithParent(parent.Fact, match, influences, molecule[carbon].HydrogenCount) is not { } sum)
                {
                    continue;
                }

                double added = sum.Variance - (parent.Fact.StandardUncertainty * parent.Fact.StandardUncertainty);
                int detail = parent.Pattern.Detail;
                if (best is not { } other
                    || added < other.Added - VarianceTolerance
                    || (added < other.Added + VarianceTolerance && detail > other.Detail))
                {
                    best = (sum, added, detail);
                }
            }
        }

        best?.Sum.AddUncertainty(IsInSubstitutedRing(molecule, carbon) ? UncertaintyModel.SubstitutedRingPpm : 0);
        return best?.Sum.ToEstimate();
    }

    private static ShiftSum? WithParent(Fact parent, ImmutableArray<int> match, ImmutableArray<Influence> influences, int hydrogens)
    {
        var sum = new ShiftSum(parent);
        bool isStrongMethine = hydrogens == 1 && influences.Any(influence => influence.Place == Influence.Alpha && IsStrong(influence));
        foreach (Influence influence in influences)
        {
            if (match.Contains(influence.Root) || influence.IsAcrossHeteroatom)
            {
                continue;
            }

            if (SchemeA.Find(influence.Place, influence.Substituent) is not { } row)
            {
                return null;
            }

            Fact increment = influence.Place == Influence.Beta && isStrongMethine
                ? row.Fact with { Value = UncertaintyModel.MethineBetaShare * row.Fact.Value }
                : row.Fact;
            Add(sum, (increment, row.IsBorrowed), influence.Place == Influence.Alpha);
        }

        return sum;
    }

    /// <summary>Adds an increment, but for alkyl, which is the schemes' zero.</summary>
    private static void Add(ShiftSum sum, (Fact Fact, bool IsBorrowed) row, bool isStacked)
    {
        if (row.Fact.Environment != Alkyl)
        {
            sum.Add(row.Fact, row.IsBorrowed, isStacked ? UncertaintyModel.StackedAlphaPpm : 0);
        }
    }

    /// <summary>Whether the carbon is in a ring that bears a substituent on another of its saturated carbons.</summary>
    internal static bool IsInSubstitutedRing(PerceivedMolecule molecule, int carbon) => molecule.RingsOf(carbon)
        .SelectMany(ring => molecule.Ring(ring))
        .Any(member => member != carbon && molecule.IsSaturatedCarbon(member)
            && molecule.Neighbours(member).Any(atom => !molecule.RingsOf(member).Any(ring => molecule.Ring(ring).Contains(atom))));

    private static double CrowdingPpm(ImmutableArray<Influence> influences) =>
        influences.Count(influence => influence.Place == Influence.Alpha && IsStrong(influence)) > 2 ? UncertaintyModel.ThreeStrongPpm : 0;

    private static bool IsStrong(Influence influence) => !influence.Substituent.Is(Alkyl);

    private static string KindOf(PerceivedMolecule molecule, int carbon) => molecule[carbon].HydrogenCount switch
    {
        3 => "CH3",
        2 => "CH2",
        1 => "CH",
        _ => "CH4",
    };

    private static double CentreOfClass(PerceivedMolecule molecule, int carbon) =>
        molecule.Neighbours(carbon).Any(atom => molecule[atom].AtomicNumber != 6) ? 3.5 : 2.2;
}
