using Qc.Engine.Reading;
using Xunit;

namespace Qc.Engine.Tests.Reading;

/// <summary>From the axis of the file to ppm that descend.</summary>
public class JcampAxisTests
{
    private const string Hertz = "##XUNITS= HZ";

    private static readonly string s_four = Jcamp.WithTable("300 1 2 3 4", 4, 300);

    [Fact]
    public void Hertz_become_ppm_by_the_frequency_of_0_ppm_and_the_reference_of_point_1()
    {
        // Test vector of CHECKVALUES 8.2: SF 400.13 MHz, 8012.82 Hz over 65536 points, point 1 at 16.0 ppm.
        var spectrum = Jcamp.Spectrum(
            Jcamp.WithTable("8012.82A%X5535\n0A", 65536, 8012.82).With(
                "##.OBSERVE FREQUENCY= 100.0",
                "##.OBSERVE FREQUENCY= 400.132\n##$SF= 400.13\n##.SHIFT REFERENCE= INTERNAL, TMS, 1, 16.0"));

        Assert.Equal(16.0, spectrum.FirstPpm);
        Assert.Equal(-3.0557e-4, spectrum.PpmPerPoint, 8);
        Assert.Equal(-4.0255, spectrum.FirstPpm + (spectrum.PpmPerPoint * 65535), 4);
        Assert.True(spectrum.AxisIsReferenced);
    }

    [Theory]
    [InlineData("INTERNAL, TMS, 1, 9.5", 9.5)]
    [InlineData("(INTERNAL, TMS, 4, 6.5)", 9.5)]
    [InlineData("EXTERNAL, acetone, in a tube, 2, 8.5 $$ comment", 9.5)]
    public void A_shift_reference_may_name_any_point(string reference, double firstPpm)
    {
        var spectrum = Jcamp.Spectrum(s_four.With(Hertz, $"##.SHIFT REFERENCE= {reference}\n{Hertz}"));

        Assert.Equal(firstPpm, spectrum.FirstPpm, 12);
        Assert.True(spectrum.AxisIsReferenced);
    }

    [Fact]
    public void An_ascending_axis_is_turned_round_with_its_reference_and_its_ordinates()
    {
        var spectrum = Jcamp.Spectrum(
            Jcamp.WithTable("0 1 2 3 4", 4, 0, 300).With(Hertz, "##.SHIFT REFERENCE= INTERNAL, TMS, 1, 6.5\n" + Hertz));

        Assert.Equal([4, 3, 2, 1], spectrum.Real);
        Assert.Equal(9.5, spectrum.FirstPpm, 12);
        Assert.Equal(-1, spectrum.PpmPerPoint, 12);
    }

    [Fact]
    public void A_ppm_axis_is_taken_as_it_is_in_either_direction()
    {
        var down = Jcamp.Spectrum(Jcamp.WithTable("9 1 2 3 4", 4, 9, 6).With(Hertz, "##XUNITS= ppm"));
        var up = Jcamp.Spectrum(Jcamp.WithTable("6 4 3 2 1", 4, 6, 9).With(Hertz, "##XUNITS= ppm"));

        Assert.Equal((9, -1), (down.FirstPpm, down.PpmPerPoint));
        Assert.Equal((9, -1), (up.FirstPpm, up.PpmPerPoint));
        Assert.Equal(down.Real, up.Real);
        Assert.True(down.AxisIsReferenced);
    }

    [Fact]
    public void Without_a_reference_the_axis_says_so_and_a_private_offset_is_a_noted_fallback()
    {
        var nominal = Jcamp.Spectrum(s_four);
        var offset = Jcamp.Spectrum(s_four.With(Hertz, "##$OFFSET= 12.25\n" + Hertz));

        Assert.False(nominal.AxisIsReferenced);
        Assert.Equal(3, nominal.FirstPpm, 12);
        Assert.Contains(nominal.Warnings, w => w.Label == ".SHIFTREFERENCE");
        Assert.True(offset.AxisIsReferenced);
        Assert.Equal(12.25, offset.FirstPpm);
        Assert.Contains(offset.Warnings, w => w.Label == "$OFFSET" && w.Line == 7);
    }

    [Fact]
    public void Point_0_of_a_reference_is_the_first_point_and_noted()
    {
        var spectrum = Jcamp.Spectrum(s_four.With(Hertz, "##.SHIFT REFERENCE= INTERNAL, TMS, 0, 9.5\n" + Hertz));

        Assert.Equal(9.5, spectrum.FirstPpm);
        Assert.Contains(spectrum.Warnings, w => w.Label == ".SHIFTREFERENCE");
    }

    [Theory]
    [InlineData("INTERNAL, TMS, 5, 9.5", "point number")]
    [InlineData("INTERNAL, TMS, 1.5, 9.5", "point number")]
    [InlineData("INTERNAL, TMS, 9.5", "compound")]
    [InlineData("INTERNAL, TMS, 1, left", "compound")]
    public void A_reference_that_cannot_be_placed_is_an_error(string reference, string expected)
    {
        var error = Jcamp.Error(s_four.With(Hertz, $"##.SHIFT REFERENCE= {reference}\n{Hertz}"));

        Assert.Equal((".SHIFTREFERENCE", 7), (error.Label, error.Line));
        Assert.Contains(expected, error.Expected, StringComparison.Ordinal);
    }

    [Theory]
    [InlineData("##XUNITS= PPM", "XUNITS")]
    [InlineData("##XUNITS= SECONDS", "XUNITS")]
    [InlineData("##XUNITS= HZ\n##DELTAX= -50", "DELTAX")]
    public void An_axis_that_contradicts_itself_is_an_error(string units, string label) =>
        Assert.Equal(label, Jcamp.Error(s_four.With(Hertz, units)).Label);

    [Fact]
    public void A_step_that_the_x_column_refutes_is_a_departure()
    {
        var spectrum = Jcamp.Spectrum(Jcamp.WithTable("300 1 2\n100 3 4", 4, 300).With(Hertz, "##DELTAX= -50\n" + Hertz));

        Assert.Equal(-1, spectrum.PpmPerPoint, 12);
        Assert.Contains(spectrum.Warnings, w => w.Label == "DELTAX");
    }

    [Fact]
    public void A_wrong_sign_of_the_step_alone_is_a_departure() =>
        Assert.Contains(Jcamp.Spectrum(s_four.With(Hertz, "##DELTAX= 100\n" + Hertz)).Warnings, w => w.Label == "DELTAX");

    [Fact]
    public void Points_as_pairs_give_the_same_spectrum()
    {
        var pairs = s_four.With("##XYDATA= (X++(Y..Y))", "##XYPOINTS= (XY..XY)").With("300 1 2 3 4", "300, 1; 200, 2\n100,3 0,4 $$ last");

        Assert.Equal(Jcamp.Spectrum(s_four).Real, Jcamp.Spectrum(pairs).Real);
        Assert.Equal(Jcamp.Spectrum(s_four).FirstPpm, Jcamp.Spectrum(pairs).FirstPpm);
        Assert.Contains("equidistant", Jcamp.Error(pairs.With("200, 2", "140, 2")).Expected, StringComparison.Ordinal);
        Assert.Equal("NPOINTS", Jcamp.Error(pairs.With("200, 2", "")).Label);
    }
}
