using Qc.Engine.Prediction.Environments;
using Xunit;

namespace Qc.Engine.Tests.Prediction;

public class TableTests
{
    public static readonly TheoryData<string> Increments =
        ["alkyl-increments", "methylene-constants", "methine-constants", "benzene-increments", "olefin-increments"];

    public static readonly TheoryData<string> Environments =
        ["parents", "aromatic-bases", "unsaturated", "exchangeable", "solvent-effects", "couplings", "hetero-couplings"];

    [Theory]
    [MemberData(nameof(Increments))]
    [MemberData(nameof(Environments))]
    public void Every_row_has_its_own_id_a_source_a_trust_tag_and_a_finite_uncertainty(string table)
    {
        var facts = FactTable.Load(table).Facts;

        Assert.NotEmpty(facts);
        Assert.Equal(facts.Length, facts.Select(fact => fact.Id).Distinct().Count());
        Assert.All(facts, fact =>
        {
            Assert.Matches("^[A-Z]{2,5}[0-9]{0,2}$", fact.Source);
            Assert.Contains(fact.Trust, (string[])["V", "R", "C", "?"]);
            Assert.InRange(fact.StandardUncertainty, 0.001, 15);
            Assert.True(double.IsFinite(fact.Value));
        });
    }

    [Theory]
    [MemberData(nameof(Increments))]
    [MemberData(nameof(Environments))]
    public void Every_source_is_explained_in_the_head_of_its_table(string table)
    {
        string head = string.Join('\n', Lines(table).TakeWhile(line => line.StartsWith('#')));

        Assert.All(FactTable.Load(table).Facts.Select(fact => fact.Source).Distinct(), source => Assert.Contains(source + ": ", head, StringComparison.Ordinal));
    }

    [Theory]
    [MemberData(nameof(Increments))]
    public void Every_increment_belongs_to_a_substituent_of_the_vocabulary(string table) =>
        Assert.All(
            FactTable.Load(table).Facts.Where(fact => fact.Place != "base"),
            fact => Assert.True(SubstituentVocabulary.Knows(fact.Environment.Split('/')[0]), fact.Id));

    [Theory]
    [MemberData(nameof(Environments))]
    public void Every_pattern_names_only_substituents_of_the_vocabulary(string table) =>
        Assert.All(
            PatternTable.Load(table).Rows.SelectMany(row => row.Pattern.SubstituentNames.Select(name => (row.Fact.Id, name))),
            use => Assert.True(SubstituentVocabulary.Knows(use.name), $"{use.Id}: {use.name}"));

    [Theory]
    [InlineData("couplings")]
    [InlineData("hetero-couplings")]
    public void Every_coupling_over_bonds_marks_its_far_atom(string table) =>
        Assert.All(
            PatternTable.Load(table).Rows.Where(row => row.Fact.Place != "gem"),
            row => Assert.InRange(row.Pattern.Span, 1, 3));

    [Theory]
    [InlineData("[C;H2")]
    [InlineData("CC")]
    [InlineData("C-")]
    [InlineData("C-(O)")]
    [InlineData("[C;H2;big]")]
    [InlineData("[Zz]")]
    [InlineData("C-O)")]
    [InlineData("")]
    public void A_malformed_pattern_is_refused(string pattern) =>
        Assert.Throws<FormatException>(() => EnvironmentPatternReader.Read(pattern));

    [Theory]
    [InlineData("CC(=O)OC", "[C;H3]-O", "OCOR")]
    [InlineData("COC(=O)c1ccccc1", "[C;H3]", "OCOAr")]
    [InlineData("COc1ccccc1", "[C;H3]", "OAr")]
    [InlineData("CN(C)C=O", "[C;H3]", "NCHO")]
    [InlineData("CN", "[C;H3]", "NH2")]
    [InlineData("C[N+](=O)[O-]", "[C;H3]", "NO2")]
    [InlineData("CS(C)(=O)=O", "[C;H3]", "SO2R")]
    [InlineData("CS(C)=O", "[C;H3]", "SOR")]
    [InlineData("CC#N", "[C;H3]", "CN")]
    [InlineData("CC(=O)O", "[C;H3]", "COOH")]
    [InlineData("Cn1ccnc1", "[C;H3]", "n")]
    [InlineData("CC(F)(F)F", "[C;H3]", "CF3")]
    public void The_vocabulary_names_what_hangs_on_a_carbon(string smiles, string carbon, string expected)
    {
        PerceivedMolecule molecule = Examples.Perceive(smiles);
        int atom = Examples.AtomAt(molecule, carbon);

        Assert.Equal(expected, molecule.SubstituentAt(atom, molecule.Neighbours(atom)[0]).Name);
    }

    private static string[] Lines(string table)
    {
        using Stream stream = typeof(FactTable).Assembly.GetManifestResourceStream($"Qc.Engine.Data.{table}.tsv")!;
        using var reader = new StreamReader(stream);
        return reader.ReadToEnd().Split('\n');
    }
}
