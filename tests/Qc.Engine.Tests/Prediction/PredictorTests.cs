using System.Collections.Immutable;
using Qc.Engine.Prediction;
using Qc.Engine.Structures;
using Xunit;

namespace Qc.Engine.Tests.Prediction;

public class PredictorTests
{
    [Fact]
    public void Equivalent_pairs_of_a_para_substituted_benzene_share_one_constant()
    {
        Expectation expectation = Predict("CCOC(=O)c1ccc(N)cc1");
        ImmutableArray<ExpectedCoupling> acrossGroups =
            [.. Aromatic(expectation).Where(coupling => GroupOf(expectation, coupling.SetA) != GroupOf(expectation, coupling.SetB))];

        Assert.Equal(4, acrossGroups.Length);
        Assert.Equal(2, acrossGroups.Select(coupling => coupling.Parameter).Distinct().Count());
        Assert.All(acrossGroups.GroupBy(coupling => coupling.Parameter), pair =>
        {
            Assert.Equal(2, pair.Count());
            Assert.Single(pair.Select(coupling => coupling.Hertz).Distinct());
        });
        Assert.Equal([0.4, 8.5], acrossGroups.Select(coupling => coupling.Hertz).Distinct().Order());
    }

    [Fact]
    public void The_two_meta_couplings_of_a_para_substituted_benzene_are_two_constants()
    {
        Expectation expectation = Predict("CCOC(=O)c1ccc(N)cc1");
        ImmutableArray<ExpectedCoupling> within =
            [.. Aromatic(expectation).Where(coupling => GroupOf(expectation, coupling.SetA) == GroupOf(expectation, coupling.SetB))];

        Assert.Equal(2, within.Length);
        Assert.NotEqual(within[0].Parameter, within[1].Parameter);
        Assert.All(within, coupling => Assert.Equal(4, coupling.Bonds));
    }

    [Fact]
    public void The_protons_of_a_vinyl_ester_couple_trans_cis_and_geminally_with_the_right_signs()
    {
        ImmutableArray<ExpectedCoupling> couplings = Predict("CC(=O)OC=C").Couplings;

        Assert.Equal([-1.6, 6.3, 14.0], couplings.Select(coupling => coupling.Hertz).Order());
        Assert.Equal([2, 3, 3], couplings.OrderBy(coupling => coupling.Hertz).Select(coupling => coupling.Bonds));
    }

    [Theory]
    [InlineData("OC(=O)/C=C/c1ccccc1", 15.9)]
    [InlineData("OC(=O)/C=C\\c1ccccc1", 12.6)]
    public void The_coupling_across_a_double_bond_follows_its_geometry(string smiles, double hertz) =>
        Assert.Contains(Predict(smiles).Couplings, coupling => coupling.Bonds == 3 && coupling.Hertz == hertz);

    [Fact]
    public void A_double_bond_of_unknown_geometry_has_a_coupling_that_covers_both()
    {
        ExpectedCoupling coupling = Predict("OC(=O)C=Cc1ccccc1").Couplings.Single(coupling => coupling.Row.Contains('|', StringComparison.Ordinal));

        Assert.InRange(12.6, coupling.Hertz - (1.96 * coupling.StandardUncertaintyHertz), coupling.Hertz);
        Assert.InRange(15.9, coupling.Hertz, coupling.Hertz + (1.96 * coupling.StandardUncertaintyHertz));
    }

    [Theory]
    [InlineData("CDCl3", 0)]
    [InlineData("DMSO-d6", 1)]
    public void An_alcohol_proton_couples_only_where_exchange_is_slow(string solvent, int couplings)
    {
        Molecule molecule = Examples.Read("CCO");
        Expectation expectation = Predictor.Predict(molecule, Topicity.Groups(molecule), solvent);

        Assert.Equal(couplings, expectation.Couplings.Count(coupling => coupling.Row.StartsWith("slow/", StringComparison.Ordinal)));
    }

    [Theory]
    [InlineData("COc1ccc(F)cc1", "19F", "fluorine/ortho", 8.8, 1)]
    [InlineData("COc1ccc(F)cc1", "19F", "fluorine/meta", 5.5, 1)]
    [InlineData("OCC(F)(F)F", "19F", "fluorine/vicinal-CF3", 8.7, 3)]
    [InlineData("COP(=O)(OC)OC", "31P", "phosphorus/phosphate-methyl", 11.0, 1)]
    public void Fluorine_and_phosphorus_split_their_neighbours(string smiles, string nucleus, string row, double hertz, int atoms)
    {
        ExpectedHeteroCoupling coupling = Predict(smiles).HeteroCouplings.First(coupling => coupling.Row == row);

        Assert.Equal((nucleus, hertz, atoms), (coupling.Nucleus, coupling.Hertz, coupling.Atoms.Length));
    }

    [Theory]
    [InlineData("C[Ge](C)(C)C", 1.2)]
    [InlineData("c1cc[se]c1", 1.0)]
    public void What_the_tables_do_not_cover_is_said_and_has_the_widest_interval(string smiles, double uncertainty) =>
        Assert.All(Predict(smiles).Shifts, shift =>
        {
            Assert.Equal(Basis.NotCovered, shift.Basis);
            Assert.Equal(uncertainty, shift.StandardUncertaintyPpm);
            Assert.Empty(shift.Rows);
        });

    [Fact]
    public void Exchangeable_protons_are_never_predicted_sharply() =>
        Assert.All(
            ((string[])["CCO", "CC(=O)O", "CCN", "CC(=O)Nc1ccc(O)cc1", "Nc1ccc(cc1)S(N)(=O)=O", "CS", "c1ccc2[nH]ccc2c1"]).Select(Predict),
            expectation => Assert.All(
                expectation.Shifts.Where(shift => expectation.Protons.Groups[shift.Group].Lability == Lability.Exchangeable),
                shift => Assert.True(shift.StandardUncertaintyPpm >= 1.5)));

    [Fact]
    public void Every_shift_has_its_group_and_a_positive_uncertainty()
    {
        Expectation expectation = Predict("CC(C)Cc1ccc(cc1)C(C)C(=O)O");

        Assert.Equal(expectation.Protons.Groups.Length, expectation.Shifts.Length);
        Assert.All(expectation.Shifts, (shift, index) => Assert.Equal(index, shift.Group));
        Assert.All(expectation.Shifts, shift => Assert.True(shift.StandardUncertaintyPpm > 0));
    }

    // Section "isomer discrimination" of the check values: C5H10O2 esters, some with the same proton counts.
    [Fact]
    public void The_C5H10O2_esters_are_told_apart_by_their_predicted_shifts()
    {
        string[] esters = ["CC(=O)OCCC", "CC(=O)OC(C)C", "CCC(=O)OCC", "CCCC(=O)OC", "CC(C)C(=O)OC", "CCCCOC=O", "CC(C)COC=O", "CCC(C)OC=O", "CC(C)(C)OC=O"];
        ImmutableArray<ImmutableArray<ExpectedShift>> spectra = [.. esters.Select(PerProton)];

        for (int a = 0; a < esters.Length; a++)
        {
            for (int b = 0; b < a; b++)
            {
                double separation = spectra[a].Zip(spectra[b]).Max(pair =>
                    Math.Abs(pair.First.ShiftPpm - pair.Second.ShiftPpm)
                    / double.Hypot(pair.First.StandardUncertaintyPpm, pair.Second.StandardUncertaintyPpm));
                Assert.True(separation > 3, $"{esters[a]} and {esters[b]} differ by only {separation:F1} standard uncertainties.");
            }
        }
    }

    private static ImmutableArray<ExpectedShift> PerProton(string smiles)
    {
        Expectation expectation = Predict(smiles);
        return
        [
            .. expectation.Shifts
                .SelectMany(shift => Enumerable.Repeat(shift, expectation.Protons.Groups[shift.Group].Count))
                .OrderBy(shift => shift.ShiftPpm),
        ];
    }

    private static IEnumerable<ExpectedCoupling> Aromatic(Expectation expectation) =>
        expectation.Couplings.Where(coupling => coupling.Row.StartsWith("benzene/", StringComparison.Ordinal));

    private static int GroupOf(Expectation expectation, int set) => expectation.Protons.Sets[set].Group;

    private static Expectation Predict(string smiles)
    {
        Molecule molecule = Examples.Read(smiles);
        return Predictor.Predict(molecule, Topicity.Groups(molecule), "CDCl3");
    }
}
