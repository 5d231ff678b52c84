using Qc.Engine.Prediction;
using Qc.Engine.Structures;
using Xunit;

namespace Qc.Engine.Tests.Prediction;

public class RingTests
{
    private const string Menthol = "C[C@@H]1CC[C@H]([C@@H](C1)O)C(C)C";
    private const string Neomenthol = "C[C@@H]1CC[C@H]([C@H](C1)O)C(C)C";

    // Menthol in CDCl3, H-1: 3.41 ppm, td, 10, 10 and 4.3 Hz, as commonly published (from memory).
    [Fact]
    public void The_carbinol_proton_of_menthol_is_axial()
    {
        double[] couplings = CarbinolCouplings(Menthol, out double shift);

        Assert.Equal(3, couplings.Length);
        Assert.InRange(couplings[0], 9.0, 11.5);
        Assert.InRange(couplings[1], 9.0, 11.5);
        Assert.InRange(couplings[2], 3.8, 4.8);
        Assert.InRange(shift, 3.2, 3.7);
    }

    // Neomenthol, H-1 equatorial: narrow, all couplings below 4 Hz (from memory).
    [Fact]
    public void The_carbinol_proton_of_neomenthol_is_equatorial()
    {
        double[] couplings = CarbinolCouplings(Neomenthol, out _);

        Assert.Equal(3, couplings.Length);
        Assert.All(couplings, hertz => Assert.InRange(hertz, 2.0, 4.5));
    }

    // The hand of the molecule and the way it is written say nothing about the balance.
    [Theory]
    [InlineData("C[C@H]1CC[C@@H]([C@H](C1)O)C(C)C")]
    [InlineData("O[C@H]1[C@H](C(C)C)CC[C@@H](C)C1")]
    public void The_mirror_image_and_another_spelling_of_menthol_couple_alike(string smiles)
    {
        double[] expected = CarbinolCouplings(Menthol, out double shift);
        double[] found = CarbinolCouplings(smiles, out double other);

        Assert.Equal(expected.Length, found.Length);
        Assert.All(expected.Zip(found), pair => Assert.Equal(pair.First, pair.Second, 9));
        Assert.Equal(shift, other, 9);
    }

    // trans-4-tert-Butylcyclohexanol: OH equatorial; the cis isomer: axial. Wide and narrow carbinol signals (common practice).
    [Fact]
    public void Cis_and_trans_4_tert_butylcyclohexanol_differ()
    {
        double[] widths = [.. ((string[])["CC(C)(C)[C@H]1CC[C@H](O)CC1", "CC(C)(C)[C@H]1CC[C@@H](O)CC1"]).Select(smiles => CarbinolCouplings(smiles, out _).Max()).Order()];

        Assert.InRange(widths[0], 2.0, 4.0);
        Assert.InRange(widths[1], 9.5, 12.0);
    }

    // CHECKVALUES 2.1: cyclopropane cis 8 to 9, trans 5 to 6; epoxide cis 4.4, trans 3.1 (styrene oxide 4.1 and 2.5, from memory).
    [Theory]
    [InlineData("COC(=O)C1CC1", "cyclopropane/cis", "cyclopropane/trans")]
    [InlineData("C1OC1c1ccccc1", "oxirane/cis", "oxirane/trans")]
    public void A_three_membered_ring_tells_cis_from_trans(string smiles, params string[] rows)
    {
        Expectation expectation = Predict(smiles);

        Assert.All(rows, row => Assert.Contains(expectation.Couplings, coupling => coupling.Row == row));
    }

    // Methylcyclohexane: 95 % equatorial; one substituent, whose own centre is no stereocentre.
    [Fact]
    public void Two_axial_neighbours_couple_most()
    {
        Expectation expectation = Predict("CC1CCCCC1");
        ExpectedCoupling largest = expectation.Couplings.Where(coupling => coupling.Bonds == 3).MaxBy(coupling => coupling.Hertz)!;
        Assert.InRange(largest.Hertz, 10.5, 12.5);
    }

    // cis-1,4-Dimethylcyclohexane has one methyl axial in either chair, so that both are equal and couplings are means.
    [Fact]
    public void Chairs_of_equal_energy_give_means_with_a_wide_interval()
    {
        Molecule molecule = Examples.Read("C[C@H]1CC[C@@H](C)CC1");
        Molecule other = Examples.Read("C[C@H]1CC[C@H](C)CC1");
        double[] shares = [.. ((Molecule[])[molecule, other]).Select(m => new Qc.Engine.Prediction.Environments.PerceivedMolecule(m).ChairsOf(0)!.FirstShare).Select(share => Math.Max(share, 1 - share)).Order()];

        Assert.Equal(0.5, shares[0], 9);
        Assert.True(shares[1] > 0.99);
    }

    [Theory]
    [InlineData("CC1CCCC(O)C1")]
    [InlineData("C1CCCCC1")]
    [InlineData("O=C1CCCCO1")]
    public void Without_drawn_centres_or_substituents_no_chair_is_preferred(string smiles) =>
        Assert.Null(Examples.Perceive(smiles).ChairsOf(0));

    private static double[] CarbinolCouplings(string smiles, out double shift)
    {
        Molecule molecule = Examples.Read(smiles);
        Expectation expectation = Predictor.Predict(molecule, Topicity.Groups(molecule), "CDCl3");
        int carbon = molecule.Atoms.First(atom => atom is { AtomicNumber: 6, HydrogenCount: 1 }
            && molecule.NeighboursOf(atom.Index).Any(other => molecule.Atoms[other].AtomicNumber == 8)).Index;
        ProtonSet set = expectation.Protons.Sets.First(set => set.Atoms.Contains(carbon));
        shift = expectation.Shifts[set.Group].ShiftPpm;
        return
        [
            .. expectation.Couplings
                .Where(coupling => coupling.Bonds == 3 && (coupling.SetA == set.Index || coupling.SetB == set.Index))
                .Select(coupling => coupling.Hertz).OrderDescending(),
        ];
    }

    private static Expectation Predict(string smiles)
    {
        Molecule molecule = Examples.Read(smiles);
        return Predictor.Predict(molecule, Topicity.Groups(molecule), "CDCl3");
    }
}
