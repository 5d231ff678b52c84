using Qc.Engine.Quantities;
using Qc.Engine.Values;
using Xunit;

namespace Qc.Engine.Tests.Quantities;

public class InternalStandardAssayTests
{
    public static TheoryData<string> Ids => [.. ReferenceFile.Rows("qnmr-budgets.tsv").Select(r => r["id"])];

    [Theory]
    [MemberData(nameof(Ids))]
    public void Published_budgets_are_reproduced_from_their_printed_inputs(string id)
    {
        IReadOnlyDictionary<string, string> row = ReferenceFile.Rows("qnmr-budgets.tsv").Single(r => r["id"] == id);
        InternalStandardAssay assay = Of(row);
        Assert.Equal(row.Number("printed_w"), assay.MassFraction.Value, 1e-4);
        Assert.Equal(row.Number("recomputed_w"), assay.MassFraction.Value, 6e-6);
        Assert.Equal(row.Number("recomputed_u"), assay.MassFraction.StandardUncertainty, 6e-6);
        Assert.Equal(row.Number("printed_U"), 2 * assay.MassFraction.StandardUncertainty, 1e-4);
    }

    [Fact]
    public void The_budget_of_maleic_acid_names_the_weighing_of_the_analyte_first()
    {
        // Shares printed with ISRD-02 table 5: weighing of the analyte 5.3e-4, purity 4.0e-4, weighing of the standard 3.5e-4.
        InternalStandardAssay assay = Of(ReferenceFile.Rows("qnmr-budgets.tsv").First());
        Assert.Equal(
            ["weighing of the analyte", "purity of the standard", "weighing of the standard"],
            assay.Budget.Take(3).Select(l => l.Source));
        Assert.Equal(5.3e-4, assay.Budget[0].RelativeStandardUncertainty, 1e-5);
    }

    private static InternalStandardAssay Of(IReadOnlyDictionary<string, string> row) => new()
    {
        IntegralRatio = new Uncertain(row.Number("ratio"), row.Number("u_ratio")),
        AnalyteProtons = new Uncertain(row.Number("N_A"), row.Number("u_N_A")),
        StandardProtons = new Uncertain(row.Number("N_S"), row.Number("u_N_S")),
        AnalyteMolarMassGramPerMol = new Uncertain(row.Number("M_A"), row.Number("u_M_A")),
        StandardMolarMassGramPerMol = new Uncertain(row.Number("M_S"), row.Number("u_M_S")),
        AnalyteMassMg = new Uncertain(row.Number("m_A"), row.Number("u_m")),
        StandardMassMg = new Uncertain(row.Number("m_S"), row.Number("u_m")),
        StandardMassFraction = new Uncertain(row.Number("w_S"), row.Number("u_w_S")),
    };
}
