using Qc.Engine.Reading;
using Xunit;

namespace Qc.Engine.Tests.Reading;

/// <summary>The X printed on each line is a checksum and never the axis.</summary>
public class XColumnTests
{
    private const string Units = "##XUNITS= HZ";

    [Theory]
    [InlineData("500 1 2\n300 3 4\n100 5 6")]
    [InlineData("499.7 1 2\n300.4 3 4\n99.9 5 6")]
    public void An_x_column_that_agrees_is_silent(string table) => Assert.Empty(Notes(table));

    [Theory]
    [InlineData("0 1 2\n2 3 4\n4 5 6", "counts points")]
    [InlineData("6 1 2\n4 3 4\n2 5 6", "counts points")]
    [InlineData("600 1 2\n400 3 4\n200 5 6", "begins at 600")]
    [InlineData("500 1 2\n200 3 4\n100 5 6", "x-check fails")]
    public void A_departure_is_noted_and_changes_nothing(string table, string note)
    {
        Assert.Contains(note, Assert.Single(Notes(table)).Message, StringComparison.Ordinal);
        Assert.Equal(5, Spectrum(table).FirstPpm);
    }

    [Fact]
    public void A_failing_check_names_its_line() =>
        Assert.Equal(17, Assert.Single(Notes("500 1 2\n200 3 4\n100 5 6")).Line);

    [Fact]
    public void A_column_that_runs_the_other_way_needs_the_step_to_confirm_the_axis()
    {
        const string table = "0 1 2\n200 3 4\n400 5 6";
        var text = Jcamp.WithTable(table, 6, 500);

        Assert.Contains("direction", Jcamp.Error(text).Message, StringComparison.Ordinal);
        Assert.Equal([1, 2, 3, 4, 5, 6], Jcamp.Spectrum(text.With(Units, "##DELTAX= -100\n" + Units)).Real);
    }

    [Fact]
    public void A_column_that_counts_points_upwards_does_not_put_a_descending_axis_in_doubt()
    {
        var text = Jcamp.WithTable("0 1 2\n2 3 4\n4 5 6", 6, 1050, 550).With("XFACTOR= 1", "XFACTOR= 100");

        Assert.Contains(Jcamp.Spectrum(text).Warnings, w => w.Message.Contains("counts points", StringComparison.Ordinal));
        Assert.Equal(10.5, Jcamp.Spectrum(text).FirstPpm, 12);
    }

    private static SpectrumMeasurement Spectrum(string table) => Jcamp.Spectrum(
        Jcamp.WithTable(table, 6, 500).With(Units, "##.SHIFT REFERENCE= INTERNAL, TMS, 1, 5\n" + Units));

    private static IEnumerable<ReadingWarning> Notes(string table) => Spectrum(table).Warnings.Where(w => w.Label == "XYDATA");
}
