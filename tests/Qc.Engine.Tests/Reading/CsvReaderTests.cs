using System.Text;
using Qc.Engine.Reading;
using Xunit;

namespace Qc.Engine.Tests.Reading;

/// <summary>Lines of ppm and intensity.</summary>
public class CsvReaderTests
{
    private const string Head = "# frequencyMHz= 400.13\n# nucleus= 1H\n# solvent= CDCl3\n";

    [Theory]
    [InlineData("10,1\n9,2.5\n8,-3e2\n")]
    [InlineData("ppm;intensity\r\n10; 1\r\n9; 2.5\r\n8; -3.0E2\r\n")]
    [InlineData("8\t-300\r9\t2.5\r10\t1")]
    [InlineData("\n# note\n10.0001,1\n\n9.0002,2.5\n8.0001,-300")]
    public void Every_separator_direction_and_line_end_is_read(string rows)
    {
        var spectrum = Assert.IsType<SpectrumMeasurement>(Assert.Single(Read(Head + rows).Measurements));

        Assert.Equal([1, 2.5, -300], spectrum.Real);
        Assert.Equal(10, spectrum.FirstPpm, 3);
        Assert.Equal(-1, spectrum.PpmPerPoint, 3);
        Assert.Equal(("1H", 400.13, "CDCl3"), (spectrum.Facts.Nucleus, spectrum.Facts.ObserveFrequencyMHz, spectrum.Facts.SolventLabel));
    }

    [Theory]
    [InlineData("10,1\n9,2\n", "frequencyMHz", 0)]
    [InlineData("# frequencyMHz= 400,13\n10,1\n9,2\n", "frequencyMHz", 0)]
    [InlineData(Head + "10,1\n9,2\n7,3\n", "CSV", 0)]
    [InlineData(Head + "10;1\n9,5;2\n9;3\n", "CSV", 5)]
    [InlineData(Head + "10,1\n9,NaN\n", "CSV", 5)]
    [InlineData(Head + "10,1\n9,1e+999\n", "CSV", 5)]
    [InlineData(Head + "10,1\n9,2,3\n", "CSV", 5)]
    [InlineData(Head + "ppm,y\nand,more\n", "CSV", 5)]
    [InlineData(Head + "10,1\n", "CSV", 0)]
    [InlineData("# frequencyMHz= 400\n# nucleus= proton\n10,1\n9,2\n", "nucleus", 0)]
    public void What_cannot_be_read_is_an_error_with_its_line(string text, string label, int line)
    {
        var error = Read(text).Error!;

        Assert.Equal((label, line), (error.Label, error.Line));
    }

    [Fact]
    public void A_nucleus_that_is_not_stated_is_noted() =>
        Assert.Equal("nucleus", Assert.Single(Assert.Single(Read("# frequencyMHz= 400\n10,1\n9,2\n").Measurements).Warnings).Label);

    private static ReadingResult Read(string text) => MeasurementReader.Read(SpectrumFormat.Csv, Encoding.UTF8.GetBytes(text));
}
