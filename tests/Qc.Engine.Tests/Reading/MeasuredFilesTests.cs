using System.IO.Compression;
using Qc.Engine.Reading;
using Xunit;

namespace Qc.Engine.Tests.Reading;

/// <summary>
/// Files as an instrument and a prediction program wrote them, from the npm package nmredata-data-test (MIT), data/generated.zip:
/// 1H_spectrum.jdx is a measured 400 MHz proton spectrum of ethylbenzene in CDCl3 (version 6.0, NTUPLES in DIF, an axis 0.14 ppm
/// too high); 13C_spectrum.jdx is a simulated 100 MHz carbon spectrum (version 5.00, XYDATA in DIFDUP, an X column one point off).
/// </summary>
public class MeasuredFilesTests
{
    [Fact]
    public void The_measured_proton_spectrum_is_read()
    {
        var spectrum = Read("jcampData/1H_spectrum.jdx");
        var facts = spectrum.Facts;

        Assert.Equal(("1H", 400.022470287248, 400.02), (facts.Nucleus, facts.ObserveFrequencyMHz, facts.ZeroPpmFrequencyMHz));
        Assert.Equal(("CDCl3", 2, 1.0, 300.0), (facts.SolventLabel, facts.Scans, facts.RelaxationDelaySeconds, facts.TemperatureKelvin));
        Assert.Equal(32768, spectrum.Real.Length);
        Assert.Equal(14.16734, spectrum.FirstPpm);
        Assert.Equal(-6393.6667674033 / 32767 / 400.02, spectrum.PpmPerPoint, 12);

        // MAX, FIRST and LAST of the header, and sums of both pages from an independent decoder.
        Assert.Equal((165440, 7892, 346198414), (spectrum.Real[0], spectrum.Real[^1], spectrum.Real.Max()));
        Assert.Equal((30650010131, 4566180058), (spectrum.Real.Sum(), spectrum.Imaginary!.Sum()));
        Assert.Equal((-170568, -202024), (spectrum.Imaginary![0], spectrum.Imaginary![^1]));
    }

    [Fact]
    public void Its_axis_is_0_14_ppm_too_high_and_left_so()
    {
        var spectrum = Read("jcampData/1H_spectrum.jdx");

        // The highest line is the middle of the CH3 triplet of ethylbenzene: 1.24 ppm in CDCl3 (from memory; 1.21 in the table of
        // monosubstituted alkanes of Pretsch, Buehlmann, Badertscher).
        var highest = spectrum.FirstPpm + (spectrum.PpmPerPoint * Array.IndexOf(spectrum.Real, spectrum.Real.Max()));
        Assert.InRange(highest - 1.24, 0.12, 0.16);
    }

    [Fact]
    public void The_simulated_carbon_spectrum_is_read_and_its_x_column_noted()
    {
        var spectrum = Read("jcampData/13C_spectrum.jdx");

        Assert.Equal(("13C", 16384, 240.0), (spectrum.Facts.Nucleus, spectrum.Real.Length, spectrum.FirstPpm));
        Assert.Equal(23520730358 * 1799.5046735248768, spectrum.Real.Sum(), 1e-9 * 4e13);
        Assert.Contains(spectrum.Warnings, w => w.Label == "XYDATA" && w.Message.Contains("begins at", StringComparison.Ordinal));
    }

    [Fact]
    public void Written_and_read_again_the_measured_spectrum_is_the_same()
    {
        var spectrum = Read("jcampData/1H_spectrum.jdx");
        var again = Assert.IsType<SpectrumMeasurement>(
            Assert.Single(MeasurementReader.Read(SpectrumFormat.JcampDx, JcampWriter.Write(spectrum)).Measurements));

        Assert.Equal(spectrum.Real, again.Real);
        Assert.Equal(spectrum.Imaginary, again.Imaginary);
        Assert.Equal((spectrum.FirstPpm, spectrum.PpmPerPoint), (again.FirstPpm, again.PpmPerPoint));
    }

    private static SpectrumMeasurement Read(string entry)
    {
        var result = MeasurementReader.Read(SpectrumFormat.JcampDx, Bytes(entry));
        Assert.Null(result.Error);
        return Assert.IsType<SpectrumMeasurement>(Assert.Single(result.Measurements));
    }

    private static byte[] Bytes(string entry)
    {
        var root = new DirectoryInfo(AppContext.BaseDirectory);
        while (root is not null && !File.Exists(Path.Combine(root.FullName, "Qc.sln")))
        {
            root = root.Parent;
        }

        Assert.True(root is not null, "The repository root was not found.");
        using var zip = ZipFile.OpenRead(Path.Combine(root.FullName, "node_modules", "nmredata-data-test", "data", "generated.zip"));
        using var stream = zip.GetEntry(entry)!.Open();
        using var bytes = new MemoryStream();
        stream.CopyTo(bytes);
        return bytes.ToArray();
    }
}
