using Xunit;

namespace Qc.Engine.Tests.Reading;

/// <summary>Forms of ordinates. Vectors: McDonald and Wilks 1988 and the worked examples of CHECKVALUES 8.4.</summary>
public class AsdfFormsTests
{
    private static readonly double[] s_specified = [1, 2, 3, 3, 2, 1, 0, -1, -2, -3];

    [Theory]
    [InlineData("900 1 2 3 3 2 1 0 -1 -2 -3")]
    [InlineData("900, 1, 2, 3, 3, 2, 1, 0, -1, -2, -3")]
    [InlineData("900.0 1.0 2e+0 .3E+01 3. +2 1 0 -1 -2.0 -3.0E000")]
    [InlineData("900+1+2+3+3+2+1+0-1-2-3")]
    [InlineData("900 1BCCBA@abc")]
    [InlineData("900ABCCBA@abc")]
    [InlineData("900 1JJ%jjjjjj")]
    [InlineData("900A JJ%jjjjjj")]
    [InlineData("900 1JT%jX")]
    [InlineData("900AJT%jX")]
    [InlineData("900 1 2+3C j j@ab c $$ four forms in one line")]
    [InlineData("900 1 2 3\n600 3 2 1 0\n200 -1 -2 -3")]
    [InlineData("900AJJ\n700C%jj\n400A@\n\n$$ a comment line\n200abc")]
    public void The_example_of_the_specification_reads_the_same_in_every_form(string table) =>
        Assert.Equal(s_specified, Jcamp.Spectrum(Jcamp.WithTable(table, 10, 900)).Real);

    [Fact]
    public void The_worked_example_gives_the_ordinates_decoded_by_hand()
    {
        var spectrum = Jcamp.Spectrum(Jcamp.Mini);

        Assert.Equal([50, 51, 51, 51, 52.5, -1.5, -1.5, -1.5, -1.5, 125, 124.5, 0], spectrum.Real);
        Assert.Equal(11, spectrum.FirstPpm, 12);
        Assert.Equal(-1, spectrum.PpmPerPoint, 12);
        Assert.Null(spectrum.Imaginary);
        Assert.False(spectrum.AxisIsReferenced);
    }

    [Fact]
    public void A_repeat_count_includes_the_first_value()
    {
        Assert.Equal([50, 50, 50, 50], Jcamp.Spectrum(Jcamp.WithTable("300 50V", 4, 300)).Real);
        Assert.Equal([50, 50, 50, 50], Jcamp.Spectrum(Jcamp.WithTable("300 50%U", 4, 300)).Real);
        Assert.Equal([7, 7, 7, 9, 11], Jcamp.Spectrum(Jcamp.WithTable("400GUKT", 5, 400)).Real);
    }

    [Fact]
    public void A_last_line_may_hold_the_check_ordinate_alone() =>
        Assert.Equal([5, 6, 7, 8], Jcamp.Spectrum(Jcamp.WithTable("300EJJJ\n0H   $$ checkpoint", 4, 300)).Real);

    [Fact]
    public void A_check_ordinate_that_differs_is_an_error_with_its_line()
    {
        var error = Jcamp.Error(Jcamp.Mini.With("300cK53", "300bK53"));

        Assert.Equal(("XYDATA", 17), (error.Label, error.Line));
        Assert.Contains("-3", error.Expected, StringComparison.Ordinal);
    }

    [Fact]
    public void After_an_absolute_ordinate_there_is_no_check() =>
        Assert.Equal([1, 2, 7, 9], Jcamp.Spectrum(Jcamp.WithTable("300AJG\n0I", 4, 300)).Real);

    [Fact]
    public void E_is_an_exponent_only_with_a_sign_or_after_a_point()
    {
        Assert.Equal([5, -5], Jcamp.Spectrum(Jcamp.WithTable("100.0Ee", 2, 100)).Real);
        Assert.Equal([512, 3], Jcamp.Spectrum(Jcamp.WithTable("100E12C", 2, 100)).Real);
        Assert.Equal([0.00125, 1250], Jcamp.Spectrum(Jcamp.WithTable("1.0E+002 1.25e-003 1.25E3", 2, 100)).Real);
    }

    [Theory]
    [InlineData("900 1 2 3 NaN 2 1 0 -1 -2 -3", "finite")]
    [InlineData("900 1 2 3 -Inf 2 1 0 -1 -2 -3", "finite")]
    [InlineData("900 1 2 3 ? 2 1 0 -1 -2 -3", "finite")]
    [InlineData("900 1 2 3 1e+999 2 1 0 -1 -2 -3", "finite")]
    [InlineData("900 1 2 3 1.0e300JJ", "2^53")]
    [InlineData("900A1234567890123456B", "digits")]
    [InlineData("900JJ", "absolute")]
    [InlineData("900TA", "ordinate before")]
    [InlineData("900A#B", "AFFN")]
    [InlineData("ABC", "abscissa")]
    [InlineData("900AZ99999999", "ordinates")]
    [InlineData("900AZ999999999999999", "digits")]
    [InlineData("900 1,5 2,5 3,5 4,5 5,5 6,5 7,5 8,5 9,5 10,5", "10 ordinates")]
    public void What_cannot_be_an_ordinate_is_an_error(string table, string expected)
    {
        var error = Jcamp.Error(Jcamp.WithTable(table, 10, 900));

        Assert.Contains(expected, error.Expected, StringComparison.Ordinal);
        Assert.True(error.Line > 0);
    }
}
