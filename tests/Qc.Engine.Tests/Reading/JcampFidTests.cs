using Qc.Engine.Reading;
using Xunit;

namespace Qc.Engine.Tests.Reading;

/// <summary>FIDs: pages, time axis, centre and group delay.</summary>
public class JcampFidTests
{
    [Fact]
    public void The_worked_pages_give_the_points_decoded_by_hand()
    {
        var fid = Fid(Jcamp.MiniFid);

        Assert.Equal([2000, 1000, -400, 0], fid.Real);
        Assert.Equal([0, 1600, 600, -100], fid.Imaginary);
        Assert.Equal(0.0005, fid.DwellSeconds, 12);
        Assert.Equal(0.002, fid.Facts.AcquisitionTimeSeconds!.Value, 12);
        Assert.Equal(5, fid.CentrePpm!.Value, 6);
        Assert.Null(fid.GroupDelayPoints);
    }

    [Fact]
    public void Lists_may_have_tabs_empty_items_and_exponents_and_pages_their_own_count_and_factor()
    {
        var fid = Fid(
            Jcamp.MiniFid
                .With("##FACTOR= 0.0005, 2, 2, 1", "##FACTOR=\t5.00000000000000e-004,\t2,\t-3,\t")
                .With("##VAR_DIM= 4, 4, 4, 2", "##VAR_DIM= 8,\t8,\t8,,")
                .With("##FIRST= 0, 2000, 0, 1", "##FIRST= 0, , ,"));

        Assert.Equal([2000, 1000, -400, 0], fid.Real);
        Assert.Equal([0, -2400, -900, 150], fid.Imaginary);
        Assert.Contains(fid.Warnings, w => w.Label == "VARDIM");

        var pagePoints = Fid(Jcamp.MiniFid.With("##PAGE= N=1", "##PAGE= N=1\n##NPOINTS= 4").With("##VAR_DIM= 4, 4, 4, 2", "##VAR_DIM= 9, 4, 4, 2")
            .With("##PAGE= N=2", "##PAGE= N=2\n##NPOINTS= 4"));
        Assert.Equal(4, pagePoints.Real.Length);
    }

    [Fact]
    public void Microseconds_are_read_as_such()
    {
        var fid = Fid(
            Jcamp.MiniFid.With("UNITS= SECONDS", "UNITS= Microseconds").With("LAST= 0.0015", "LAST= 1500").With("FACTOR= 0.0005", "FACTOR= 500"));

        Assert.Equal(0.0005, fid.DwellSeconds, 12);
    }

    [Theory]
    [InlineData("67.985", null)]
    [InlineData("2.5", 2.5)]
    [InlineData("0", null)]
    [InlineData("-1", null)]
    public void A_group_delay_counts_only_where_it_is_positive_and_inside_the_fid(string stated, double? delay) =>
        Assert.Equal(delay, Fid(Jcamp.MiniFid.With("##$SF=", $"##$GRPDLY= {stated}\n##$SF=")).GroupDelayPoints);

    [Fact]
    public void A_shift_reference_alone_does_not_place_an_fid()
    {
        var fid = Fid(Jcamp.MiniFid.With("##$SF= 100", "##.SHIFT REFERENCE= INTERNAL, TMS, 1, 15"));

        Assert.Null(fid.CentrePpm);
        Assert.Contains(fid.Warnings, w => w.Label == ".SHIFTREFERENCE" && w.Line == 8);
    }

    [Theory]
    [InlineData("##$SF= 100", "##$SW_h= 1000\n##$SF= 100", "$SWH")]
    [InlineData("UNITS= SECONDS", "UNITS= POINTS", "UNITS")]
    [InlineData("LAST= 0.0015", "LAST= 1500", "LAST")]
    [InlineData("LAST= 0.0015", "LAST= -0.0015", "LAST")]
    [InlineData("MODE= SIMULTANEOUS", "MODE= SEQUENTIAL", ".ACQUISITIONMODE")]
    [InlineData("SYMBOL= X, R, I, N", "SYMBOL= X, R, J, N", "SYMBOL")]
    [InlineData("SYMBOL= X, R, I, N", "SYMBOL= T, R, I, N", "SYMBOL")]
    [InlineData("LAST= 0.0015, 0", "LAST= , 0", "LAST")]
    [InlineData("FACTOR= 0.0005, 2", "FACTOR= 0.0005, two", "FACTOR")]
    [InlineData("(I..I)", "(R..R)", "DATATABLE")]
    [InlineData("(X++(I..I)), XYDATA", "(I..I)", "DATATABLE")]
    [InlineData("##PAGE= N=2\n##DATA TABLE= (X++(I..I)), XYDATA\n0@Q00n00l50\n3e0\n", "", "NTUPLES")]
    [InlineData("0@Q00n00l50\n3e0", "0@Q00n00\n2C00", "VARDIM")]
    public void An_fid_that_is_incomplete_or_contradicts_itself_is_an_error(string old, string replacement, string label) =>
        Assert.Equal(label, Jcamp.Error(Jcamp.MiniFid.With(old, replacement)).Label);

    [Fact]
    public void Pages_of_a_spectrum_are_turned_round_together()
    {
        var result = Jcamp.Read(
            Jcamp.MiniFid.With("##DATA TYPE= NMR FID", "##DATA TYPE= NMR SPECTRUM").With("UNITS= SECONDS", "UNITS= HZ")
                .With("LAST= 0.0015", "LAST= 300").With("FACTOR= 0.0005", "FACTOR= 100"));
        var spectrum = Assert.IsType<SpectrumMeasurement>(Assert.Single(result.Measurements));

        Assert.Equal([0, -400, 1000, 2000], spectrum.Real);
        Assert.Equal([-100, 600, 1600, 0], spectrum.Imaginary!);
        Assert.Equal(3, spectrum.FirstPpm, 12);
    }

    private static FidMeasurement Fid(string text)
    {
        var result = Jcamp.Read(text);
        Assert.Null(result.Error);
        return Assert.IsType<FidMeasurement>(Assert.Single(result.Measurements));
    }
}
