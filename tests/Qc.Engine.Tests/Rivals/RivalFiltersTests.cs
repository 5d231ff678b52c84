using System.Collections.Immutable;
using Qc.Engine.Prediction.Environments;
using Qc.Engine.Rivals;
using Qc.Engine.Structures;
using Qc.Engine.Tests.Structures;
using Xunit;

namespace Qc.Engine.Tests.Rivals;

public class RivalFiltersTests(StructureFixture structures) : IClassFixture<StructureFixture>
{
    public static TheoryData<string, string, string> Rows
    {
        get
        {
            var rows = new TheoryData<string, string, string>();
            foreach (ImmutableDictionary<string, string> row in TabularResource.Rows("rival-filters"))
            {
                rows.Add(row["id"], row["removes"], row["keeps"]);
            }

            return rows;
        }
    }

    [Theory]
    [MemberData(nameof(Rows))]
    public void A_filter_removes_its_kind_and_keeps_a_near_one(string id, string removes, string keeps)
    {
        RivalFilters only = RivalFilters.None.With(id, true);
        Assert.Equal(id, only.Objection(structures.Read(removes))?.Id);
        Assert.Null(only.Objection(structures.Read(keeps)));
        Assert.Null(RivalFilters.Default.With(id, false).Objection(structures.Read(keeps)));
        Assert.NotEqual(id, RivalFilters.Default.With(id, false).Objection(structures.Read(removes))?.Id);
    }

    /// <summary>Substances of commerce; a filter that takes one of them for impossible is wrong.</summary>
    [Theory]
    [InlineData("CCCOC(C)=O")]
    [InlineData("CC(=O)Nc1ccc(O)cc1")]
    [InlineData("CC(=O)OC(C)=O")]
    [InlineData("CC(=O)CC(C)=O")]
    [InlineData("CN(C)N=O")]
    [InlineData("CCOC(=O)OCC")]
    [InlineData("CC1(C)C2CCC1(C)C(=O)C2")]
    [InlineData("CC1=CCC2CC1C2(C)C")]
    [InlineData("c1ccc2ccccc2c1")]
    [InlineData("NC(N)=O")]
    [InlineData("CS(C)=O")]
    [InlineData("CC(C)=NO")]
    [InlineData("N#CC1CC1")]
    [InlineData("O=[N+]([O-])c1ccccc1")]
    public void Substances_of_commerce_are_kept(string smiles)
    {
        Molecule molecule = structures.Read(smiles);
        Assert.Null(RivalFilters.Default.Objection(molecule));
    }

    [Fact]
    public void An_unknown_filter_is_refused() => Assert.Throws<ArgumentException>(() => RivalFilters.Default.With("no-such", true));
}
