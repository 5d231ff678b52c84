using Qc.Engine.Prediction;
using Qc.Engine.Structures;
using Xunit;

namespace Qc.Engine.Tests.Prediction;

public class SolventTests
{
    // Acetone CH3 in seven solvents, Fulmer et al., Organometallics 2010, 29, 2176 (read): the class means must come within
    // their own interval.
    [Theory]
    [InlineData("CDCl3", 2.17)]
    [InlineData("acetone-d6", 2.09)]
    [InlineData("DMSO-d6", 2.09)]
    [InlineData("CD3CN", 2.08)]
    [InlineData("CD3OD", 2.15)]
    [InlineData("D2O", 2.22)]
    [InlineData("C6D6", 1.55)]
    public void Acetone_is_within_its_interval_in_every_solvent(string solvent, double measuredPpm)
    {
        ExpectedShift shift = Shift("CC(C)=O", solvent);

        Assert.InRange(measuredPpm, shift.ShiftPpm - (1.96 * shift.StandardUncertaintyPpm), shift.ShiftPpm + (1.96 * shift.StandardUncertaintyPpm));
    }

    [Fact]
    public void A_solvent_without_a_table_widens_and_does_not_move()
    {
        ExpectedShift known = Shift("CCOCC", "CDCl3");
        ExpectedShift unknown = Shift("CCOCC", "sulfolane-d8");

        Assert.Equal(known.ShiftPpm, unknown.ShiftPpm);
        Assert.Equal(double.Hypot(known.StandardUncertaintyPpm, 0.20), unknown.StandardUncertaintyPpm, 1e-12);
    }

    [Fact]
    public void In_water_protons_beside_an_amine_are_less_certain_than_beside_an_ether()
    {
        double Widening(string smiles) => Shift(smiles, "D2O").StandardUncertaintyPpm - Shift(smiles, "CDCl3").StandardUncertaintyPpm;

        Assert.True(Widening("CN") > 0.2);
        Assert.True(Widening("COC") < 0.1);
    }

    private static ExpectedShift Shift(string smiles, string solvent)
    {
        Molecule molecule = Examples.Read(smiles);
        return Predictor.Predict(molecule, Topicity.Groups(molecule), solvent).Shifts[0];
    }
}
