using Qc.Engine.Reading;
using Xunit;

namespace Qc.Engine.Tests.Reading;

/// <summary>nmrML: arrays, facts, axis, and hostile XML.</summary>
public class NmrMlReaderTests
{
    private static readonly double[] s_interleaved = [1, -1, 2, -2, 3, -3, 4, -4];
    private static readonly string s_fid = NmrMl.Array("fidData", "Complex128", NmrMl.Doubles(s_interleaved));
    private static readonly string s_spectrum = NmrMl.Array("spectrumDataArray", "float64", NmrMl.Doubles(5, 6, 7, 8));
    private static readonly string s_both = NmrMl.File(s_fid, s_spectrum);

    [Fact]
    public void An_fid_and_its_spectrum_are_read_with_their_facts()
    {
        var result = NmrMl.Read(s_both);
        Assert.Null(result.Error);
        var fid = Assert.IsType<FidMeasurement>(result.Measurements[0]);
        var spectrum = Assert.IsType<SpectrumMeasurement>(result.Measurements[1]);

        Assert.Equal([1, 2, 3, 4], fid.Real);
        Assert.Equal([-1, -2, -3, -4], fid.Imaginary);
        Assert.Equal(1 / 6000.0, fid.DwellSeconds, 12);
        Assert.Equal(5, fid.CentrePpm!.Value, 6);
        Assert.Equal(2.5, fid.GroupDelayPoints);
        Assert.Equal(("1H", 500.0025, 64, 25.0, 302.7), (
            fid.Facts.Nucleus, fid.Facts.ObserveFrequencyMHz, fid.Facts.Scans, fid.Facts.RelaxationDelaySeconds, fid.Facts.TemperatureKelvin));
        Assert.Equal([5, 6, 7, 8], spectrum.Real);
        Assert.Equal((11, -3), (spectrum.FirstPpm, spectrum.PpmPerPoint));
    }

    [Fact]
    public void An_axis_as_wide_as_the_spectral_width_ends_one_step_beyond_the_last_point()
    {
        // 6000 Hz at 500 MHz are 12 ppm, so that 4 points from 11 to -1 are 3 ppm apart, not 4.
        var spectrum = Assert.IsType<SpectrumMeasurement>(
            NmrMl.Read(s_both.With("endValue=\"2\"", "endValue=\"-1\"")).Measurements[1]);

        Assert.Equal(-3, spectrum.PpmPerPoint);
        Assert.Contains(spectrum.Warnings, w => w.Label == "xAxis");
    }

    [Fact]
    public void Every_number_format_and_plain_base64_give_the_same_numbers()
    {
        string[] fids =
        [
            NmrMl.Array("fidData", "complex128", NmrMl.Doubles(s_interleaved), isCompressed: false),
            NmrMl.Array("fidData", "complex64", NmrMl.Singles([.. s_interleaved.Select(v => (float)v)])),
        ];
        Assert.All(fids, f => Assert.Equal([1, 2, 3, 4], ((FidMeasurement)NmrMl.Read(NmrMl.File(f, s_spectrum)).Measurements[0]).Real));

        string[] spectra =
        [
            NmrMl.Array("spectrumDataArray", "float32", NmrMl.Singles(5, 6, 7, 8)),
            NmrMl.Array("spectrumDataArray", "integer32", NmrMl.Integers(5, 6, 7, 8), isCompressed: false),
        ];
        Assert.All(spectra, s => Assert.Equal([5, 6, 7, 8], ((SpectrumMeasurement)NmrMl.Read(NmrMl.File(s_fid, s)).Measurements[1]).Real));
    }

    [Fact]
    public void An_ascending_axis_is_turned_round()
    {
        var text = s_both.With("startValue=\"11\" endValue=\"2\"", "startValue=\"2\" endValue=\"11\"");
        var spectrum = Assert.IsType<SpectrumMeasurement>(NmrMl.Read(text).Measurements[1]);

        Assert.Equal([8, 7, 6, 5], spectrum.Real);
        Assert.Equal((11, -3), (spectrum.FirstPpm, spectrum.PpmPerPoint));
    }

    [Theory]
    [InlineData("Complex128", "Complex256", "fidData")]
    [InlineData("Complex128", "float64", "fidData")]
    [InlineData("numberOfDataPoints=\"8\"", "numberOfDataPoints=\"6\"", "fidData")]
    [InlineData("numberOfDataPoints=\"4\"", "numberOfDataPoints=\"5\"", "spectrumDataArray")]
    [InlineData("name=\"hydrogen atom\"", "name=\"unobtainium\"", "acquisitionNucleus")]
    [InlineData("value=\"500.0025\"", "value=\"500,0025\"", "irradiationFrequency")]
    [InlineData("unitName=\"hertz\"", "unitName=\"parts per million\"", "sweepWidth")]
    [InlineData("unitName=\"parts per million\" startValue", "unitName=\"hertz\" startValue", "xAxis")]
    [InlineData("startValue=\"11\"", "startValue=\"2\"", "xAxis")]
    [InlineData("compressed=\"true\" byteFormat=\"Complex128\">", "compressed=\"true\" byteFormat=\"Complex128\">AAAA", "fidData")]
    [InlineData("compressed=\"true\" byteFormat=\"Complex128\">", "compressed=\"true\" byteFormat=\"Complex128\">!", "fidData")]
    [InlineData("</nmrML>", "", "")]
    [InlineData("<nmrML", "<!DOCTYPE nmrML [<!ENTITY a \"b\">]><nmrML", "")]
    public void What_cannot_be_read_is_an_error(string old, string replacement, string label) =>
        Assert.Equal(label, NmrMl.Read(s_both.With(old, replacement)).Error!.Label);

    [Fact]
    public void Numbers_that_are_not_finite_are_an_error()
    {
        var spectrum = NmrMl.Array("spectrumDataArray", "float64", NmrMl.Doubles(5, double.NaN, 7, 8));

        Assert.Contains("finite", NmrMl.Read(NmrMl.File(s_fid, spectrum)).Error!.Expected, StringComparison.Ordinal);
    }

    [Fact]
    public void An_array_that_unpacks_to_too_much_is_an_error()
    {
        var bomb = NmrMl.Array("fidData", "Complex128", new byte[1_000_000]);

        Assert.Contains(
            "unpacks", NmrMl.Read(NmrMl.File(bomb, s_spectrum), new ReadingLimits { MaxPoints = 1000 }).Error!.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void Nesting_is_limited()
    {
        var deep = string.Concat(Enumerable.Repeat("<a>", 50)) + string.Concat(Enumerable.Repeat("</a>", 50));

        Assert.Contains("nested", NmrMl.Read(s_both.With("<spectrumList>", deep + "<spectrumList>")).Error!.Message, StringComparison.Ordinal);
    }
}
