using System.Diagnostics;
using Qc.Engine.Rivals;
using Xunit;
using Xunit.Abstractions;

namespace Qc.Engine.Tests.Rivals;

public class IsomerGeneratorTests(ITestOutputHelper output)
{
    // Alkanes: H. R. Henze and C. M. Blair, J. Am. Chem. Soc. 53 (1931) 3077; OEIS A000602; both from memory.
    [Theory]
    [InlineData(1, 1)]
    [InlineData(4, 2)]
    [InlineData(5, 3)]
    [InlineData(6, 5)]
    [InlineData(7, 9)]
    [InlineData(8, 18)]
    [InlineData(9, 35)]
    [InlineData(10, 75)]
    [InlineData(11, 159)]
    [InlineData(12, 355)]
    [InlineData(13, 802)]
    [InlineData(14, 1858)]
    [InlineData(16, 10359)]
    public void Alkanes_are_as_many_as_counted_by_Henze_and_Blair(int carbons, int published) =>
        Assert.Equal(published, Count($"C{carbons}H{(2 * carbons) + 2}"));

    // Monohydric alcohols are as many as alkyl radicals: Henze and Blair, J. Am. Chem. Soc. 53 (1931) 3042; OEIS A000598; from
    // memory. Chlorides count them without the ethers.
    [Theory]
    [InlineData(1, 1)]
    [InlineData(2, 1)]
    [InlineData(3, 2)]
    [InlineData(4, 4)]
    [InlineData(5, 8)]
    [InlineData(6, 17)]
    [InlineData(7, 39)]
    [InlineData(8, 89)]
    public void Alkyl_compounds_are_as_many_as_counted_by_Henze_and_Blair(int carbons, int published)
    {
        Assert.Equal(published, Count($"C{carbons}H{(2 * carbons) + 1}Cl"));
        IEnumerable<IsomerGraph> alcohols = IsomerGenerator.Isomers(IsomerFormula.Parse($"C{carbons}H{(2 * carbons) + 2}O")!)
            .Where(graph => graph.ToMolecule().Atoms.Any(atom => atom is { AtomicNumber: 8, HydrogenCount: 1 }));
        Assert.Equal(published, alcohols.Count());
    }

    // Counts of isomers recalled from tables of the literature on structure generation; C3H6O, C4H10O and C5H12O also by hand.
    [Theory]
    [InlineData("C6H12", 25)]
    [InlineData("C6H10", 77)]
    [InlineData("C6H8", 159)]
    [InlineData("C6H6", 217)]
    [InlineData("C3H6O", 9)]
    [InlineData("C4H10O", 7)]
    [InlineData("C5H12O", 14)]
    [InlineData("C4H8O", 26)]
    public void Isomers_of_a_formula_are_as_many_as_recalled(string formula, int recalled) =>
        Assert.Equal(recalled, Count(formula));

    [Theory]
    [InlineData("C5H12")]
    [InlineData("C5H8")]
    [InlineData("C5H4")]
    [InlineData("C4H8O")]
    [InlineData("C3H4O2")]
    [InlineData("C3H5NO")]
    [InlineData("C4H5N")]
    [InlineData("C2H3ClN2")]
    [InlineData("C3H7O2P")]
    [InlineData("C3H6Br2S")]
    public void Brute_force_over_all_multigraphs_finds_the_same_set(string formula)
    {
        IsomerFormula parsed = IsomerFormula.Parse(formula)!;
        string[] fast = [.. IsomerGenerator.Multigraphs(parsed).Select(MultigraphTwin.CodeOf)];
        string[] slow = [.. MultigraphTwin.All(parsed)];
        output.WriteLine($"{formula}: {slow.Length}");
        Assert.Equal(slow.Order(StringComparer.Ordinal), fast.Order(StringComparer.Ordinal));
    }

    [Fact]
    public void Kekule_forms_of_one_aromatic_compound_are_one_isomer()
    {
        // Ortho-xylene has two Kekulé forms that are different multigraphs; the other three benzenes of C8H10 have one.
        static bool IsBenzene(IsomerGraph graph) => graph.ToMolecule().Atoms.Count(atom => atom.IsAromatic) == 6;
        IsomerFormula xylene = IsomerFormula.Parse("C8H10")!;
        Assert.Equal(4, IsomerGenerator.Isomers(xylene).Count(IsBenzene));
        Assert.Equal(5, IsomerGenerator.Multigraphs(xylene).Count(IsBenzene));
    }

    [Theory]
    [InlineData("CH3")]
    [InlineData("C2H8")]
    [InlineData("C2H5O")]
    public void A_formula_that_no_valences_fit_has_no_isomers(string formula) => Assert.Equal(0, Count(formula));

    [Theory]
    [InlineData("")]
    [InlineData("c6h6")]
    [InlineData("C6Xx")]
    [InlineData("C2H6Fe")]
    [InlineData("C0H4")]
    public void A_text_that_is_no_such_formula_is_refused(string text) => Assert.Null(IsomerFormula.Parse(text));

    [Fact]
    public void Generation_stops_when_the_caller_gives_up()
    {
        using var source = new CancellationTokenSource();
        Assert.Throws<OperationCanceledException>(() =>
        {
            foreach (IsomerGraph graph in IsomerGenerator.Isomers(IsomerFormula.Parse("C20H42")!, source.Token))
            {
                source.Cancel();
            }
        });
    }

    private int Count(string formula)
    {
        var watch = Stopwatch.StartNew();
        int count = IsomerGenerator.Isomers(IsomerFormula.Parse(formula)!).Count();
        output.WriteLine($"{formula}: {count} in {watch.Elapsed.TotalMilliseconds:0.0} ms");
        return count;
    }
}
