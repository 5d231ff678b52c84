using Qc.Engine.Rivals;
using Qc.Engine.Structures;
using Xunit;

namespace Qc.Chemistry.Tests;

/// <summary>What the engine writes and perceives, against the toolkit that reads it.</summary>
[Collection(ReaderCollection.Name)]
public class SmilesWriterTests(ReaderFixture fixture)
{
    [Theory]
    [InlineData("CCCOC(C)=O")]
    [InlineData("CC(=O)Nc1ccc(O)cc1")]
    [InlineData("C1CC2CCC1C2")]
    [InlineData("c1ccc2[nH]ccc2c1")]
    [InlineData("c1ccc(-c2ccccc2)cc1")]
    [InlineData("CS(=O)(=O)c1cccnc1")]
    [InlineData("O=[N+]([O-])c1ccccc1")]
    [InlineData("C[N+](C)(C)CCO.[Cl-]")]
    [InlineData("[2H]C(Cl)(Cl)Cl")]
    [InlineData("COC(=O)/C=C\\C(=O)OC")]
    [InlineData("COC(=O)/C=C/C(=O)OC")]
    [InlineData("C/C=C/C=C\\C")]
    [InlineData("C/C(Cl)=C(\\F)Br")]
    [InlineData("C1CCC/C=C/CC1")]
    [InlineData("C[C@H](O)C(=O)O")]
    [InlineData("C[C@@H](O)[C@H](O)C")]
    [InlineData("C[C@H]1CC[C@@H](C)CC1")]
    [InlineData("CC(C)[C@@H]1CC[C@@H](C)C[C@H]1O")]
    [InlineData("C[S@](=O)c1ccccc1")]
    [InlineData("CC1(C)[C@@H]2CC[C@]1(C)C(=O)C2")]
    [InlineData("F[C@](Cl)(Br)I")]
    [InlineData("O=c1cc[nH]cc1")]
    public void A_written_structure_is_read_back_as_itself(string smiles)
    {
        ReadStructure structure = fixture.Smiles(smiles);
        string written = SmilesWriter.Write(structure.Molecule);
        Assert.Equal(structure.Smiles, fixture.Smiles(written).Smiles);
    }

    [Theory]
    [InlineData("C6H12O2")]
    [InlineData("C5H5N")]
    [InlineData("C4H4N2")]
    [InlineData("C4H3ClS")]
    [InlineData("C6H6")]
    [InlineData("C5H6O")]
    public void Isomers_kept_by_the_filters_are_each_one_compound_to_the_toolkit_with_the_same_aromatic_atoms(string formula)
    {
        var seen = new HashSet<string>();
        foreach (IsomerGraph graph in IsomerGenerator.Isomers(IsomerFormula.Parse(formula)!).Where((_, i) => i % 3 == 0))
        {
            Molecule made = graph.ToMolecule();
            if (RivalFilters.Default.Objection(made) is not null)
            {
                continue;
            }

            string written = SmilesWriter.Write(made);
            ReadStructure read = fixture.Smiles(written);
            Assert.True(seen.Add(read.Smiles), $"{written} is {read.Smiles}, which was made before.");
            Assert.True(StructureForm.Of(made) == StructureForm.Of(Undrawn(read.Molecule)), $"{written} is read as {read.Smiles}.");
        }
    }

    [Fact]
    public void Benzenes_and_azoles_have_the_rings_and_marks_of_the_toolkit()
    {
        foreach (string smiles in new[] { "Cc1ccccc1O", "c1ccc2ccccc2c1", "c1ccc2[nH]cnc2c1", "O=C1C=CC(=O)C=C1", "c1ccc2cccc-2cc1", "Cn1cnc2c1c(=O)n(C)c(=O)n2C", "C1CC1c1ccoc1", "O=c1cc1" })
        {
            Molecule read = fixture.Smiles(smiles).Molecule;
            Molecule made = Perception.Complete(read.Atoms, read.Bonds);
            Assert.Equal(read.Atoms.Select(atom => atom.IsAromatic), made.Atoms.Select(atom => atom.IsAromatic));
            Assert.Equal(read.Bonds.Select(bond => bond.IsAromatic), made.Bonds.Select(bond => bond.IsAromatic));
            Assert.Equal(
                read.Rings.Select(ring => string.Join(',', ring.Order())).Order(StringComparer.Ordinal),
                made.Rings.Select(ring => string.Join(',', ring.Order())).Order(StringComparer.Ordinal));
        }
    }

    /// <summary>The toolkit may set the arrangement of small rings by itself; constitution is compared here.</summary>
    private static Molecule Undrawn(Molecule molecule) => new(
        [.. molecule.Atoms.Select(atom => atom with { Handedness = Handedness.None, Winding = Winding.None })],
        [.. molecule.Bonds.Select(bond => bond with { Geometry = DoubleBondGeometry.None, SideOfA = -1, SideOfB = -1 })],
        molecule.Rings);
}
