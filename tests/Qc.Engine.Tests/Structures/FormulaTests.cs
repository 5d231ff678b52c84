using System.Globalization;
using Qc.Engine.Structures;
using Qc.Engine.Values;
using Xunit;

namespace Qc.Engine.Tests.Structures;

public sealed class FormulaTests(StructureFixture fixture) : IClassFixture<StructureFixture>
{
    [Fact]
    public void Formulas_and_masses_of_the_list_agree_with_the_toolkit_within_the_uncertainty()
    {
        Dictionary<string, string> smiles = ReferenceFile.Rows("molecules.txt", '|').ToDictionary(row => row[0], row => row[2]);
        string[][] rows = [.. ReferenceFile.Rows("formula_check.tsv", '\t')];

        Assert.Equal(87, rows.Length);
        foreach (string[] row in rows)
        {
            Molecule molecule = fixture.Read(smiles[row[0]]);
            Uncertain mass = MolarMass.Of(molecule);
            const double rounding = 0.0006;
            double theirs = double.Parse(row[3], CultureInfo.InvariantCulture);

            Assert.Equal(row[2], MolecularFormula.Of(molecule).ToString());
            Assert.True(
                Math.Abs(mass.Value - theirs) <= mass.StandardUncertainty + rounding,
                $"{row[1]}: {mass.Value} (u {mass.StandardUncertainty}) against {theirs}");
        }
    }

    // Molar masses and standard uncertainties of the BIPM/NMIJ internal standards: CHECKVALUES 6.2 [V].
    [Theory]
    [InlineData("OC(=O)/C=C\\C(=O)O", 116.072, 0.0025)]
    [InlineData("CS(C)(=O)=O", 94.136, 0.005)]
    [InlineData("OC(=O)c1ccccc1C(=O)[O-].[K+]", 204.223, 0.004)]
    [InlineData("OC(=O)c1cc(cc(c1)C(F)(F)F)C(F)(F)F", 258.119, 0.0058)]
    [InlineData("COC(=O)c1ccc(cc1)C(=O)OC", 194.186, 0.0085)]
    [InlineData("C[Si](C)(C)c1ccc(cc1)[Si](C)(C)C", 222.478, 0.015)]
    [InlineData("C[Si](C)(C)c1c([2H])c([2H])c([Si](C)(C)C)c([2H])c1[2H]", 226.502, 0.013)]
    public void Masses_of_the_published_standards_agree(string smiles, double published, double publishedUncertainty)
    {
        Uncertain mass = MolarMass.Of(fixture.Read(smiles));
        double combined = Math.Sqrt(Math.Pow(mass.StandardUncertainty, 2) + Math.Pow(publishedUncertainty, 2));

        Assert.True(Math.Abs(mass.Value - published) <= combined, $"{mass.Value} against {published}");
        Assert.InRange(mass.StandardUncertainty, publishedUncertainty / 2, publishedUncertainty * 2);
    }

    [Fact]
    public void Atoms_of_one_element_err_together()
    {
        // C: interval 12.0096 to 12.0116, value 12.011: u = sqrt(0.001^2/3 + 0.0004^2) = 0.000702; H: likewise 0.0000819.
        Uncertain mass = MolarMass.Of(fixture.Read("c1ccccc1"));

        Assert.Equal((6 * 12.011) + (6 * 1.008), mass.Value, 9);
        Assert.Equal(Math.Sqrt(Math.Pow(6 * 0.00070238, 2) + Math.Pow(6 * 0.00008186, 2)), mass.StandardUncertainty, 6);
    }

    [Theory]
    [InlineData("[2H]C(Cl)(Cl)Cl", "CDCl3")]
    [InlineData("[2H]O[2H]", "D2O")]
    [InlineData("[Na+].[Cl-]", "ClNa")]
    [InlineData("[13CH3]C(=O)O", "C[13C]H4O2")]
    [InlineData("C[N+](C)(C)C", "C4H12N+")]
    [InlineData("[O-]C(=O)C(=O)[O-]", "C2O4 2-")]
    public void Formulas_are_in_Hill_order(string smiles, string formula) =>
        Assert.Equal(formula, MolecularFormula.Of(fixture.Read(smiles)).ToString());

    [Theory]
    [InlineData("c1ccccc1", 4)]
    [InlineData("CC#N", 2)]
    [InlineData("CCO", 0)]
    [InlineData("C1CCCCC1", 1)]
    [InlineData("C[N+](=O)[O-]", 1)]
    [InlineData("CS(C)(=O)=O", 0)]
    [InlineData("Cn1cnc2c1c(=O)n(C)c(=O)n2C", 6)]
    public void Degrees_of_unsaturation_follow_from_the_formula(string smiles, double expected) =>
        Assert.Equal(expected, MolecularFormula.Of(fixture.Read(smiles)).DegreesOfUnsaturation);
}
