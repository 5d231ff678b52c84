using System.Text;
using CsCheck;
using Qc.Engine.Reading;
using Xunit;

namespace Qc.Engine.Tests.Reading;

/// <summary>What is written reads back the same.</summary>
public class JcampWriterTests
{
    private static readonly Gen<double[]> s_integers = Gen.OneOf(
        Gen.Int[-3, 3].Select(i => (double)i),
        Gen.Int[-(1 << 28), 1 << 28].Select(i => (double)i),
        Gen.Long[-300_000_000_000_000, 300_000_000_000_000].Select(i => (double)i)).Array[2, 300];

    // Runs, as in smooth and empty regions, so that repeat counts occur.
    private static readonly Gen<double[]> s_runs = Gen.Select(Gen.Int[-40, 40], Gen.Int[-2, 2], Gen.Int[1, 120])
        .Select((start, step, length) => Enumerable.Range(0, length).Select(i => (double)(start + (step * i)))).Array[2, 20]
        .Select(parts => parts.SelectMany(p => p).ToArray());

    private static readonly Gen<(double First, double Step)> s_axes = Gen.Select(Gen.Double[-3, 14], Gen.Double[1e-5, 0.05])
        .Select((first, step) => (first, -step));

    private static readonly Gen<double> s_factors = Gen.Int[0, 5].Select(i => ((double[])[1, 0.5, 0.1, 3.7e-9, -2, 1e12])[i]);

    [Theory]
    [InlineData(OrdinateForm.DifDup)]
    [InlineData(OrdinateForm.Affn)]
    public void A_spectrum_of_integers_times_a_factor_returns_bit_for_bit(OrdinateForm form) =>
        Gen.Select(Gen.OneOf(s_integers, s_runs), s_axes, s_factors, Gen.Bool, Gen.Bool)
            .Where((ordinates, axis, _, _, _) => axis.Step * (ordinates.Length - 1) < -0.2)
            .Sample(
                (integers, axis, factor, isComplex, isReferenced) =>
                {
                    var real = integers.Select(i => i * factor).ToArray();
                    var imaginary = isComplex ? real.Reverse().ToArray() : null;
                    var spectrum = new SpectrumMeasurement(Facts(), [], real, imaginary, axis.First, axis.Step, isReferenced);

                    var result = MeasurementReader.Read(SpectrumFormat.JcampDx, JcampWriter.Write(spectrum, form, factor));

                    Assert.Null(result.Error);
                    var read = Assert.IsType<SpectrumMeasurement>(Assert.Single(result.Measurements));
                    Assert.Equal((axis.First, axis.Step, isReferenced), (read.FirstPpm, read.PpmPerPoint, read.AxisIsReferenced));
                    Assert.Equal(real, read.Real);
                    Assert.Equal(imaginary, read.Imaginary);
                    Assert.DoesNotContain(read.Warnings, w => !w.Label.StartsWith('$'));
                },
                iter: 300,
                seed: "0000KVbJm3K5");

    [Fact]
    public void Plain_numbers_without_a_factor_return_bit_for_bit()
    {
        double[] ordinates = [0.1, -1 / 3.0, 6.02214076e23, 5e-324, 0, 1e-5, 123456789.123456789, double.MaxValue, -1];
        var spectrum = new SpectrumMeasurement(Facts(), [], ordinates, null, 9.25, -0.1, true);

        Assert.Equal(ordinates, ReadBack(JcampWriter.Write(spectrum, OrdinateForm.Affn)).Real);
    }

    [Fact]
    public void Other_ordinates_are_rounded_to_the_largest_divided_by_2_to_28()
    {
        double[] ordinates = [.. Enumerable.Range(0, 500).Select(i => Math.Sin(i * 0.1) * 12.3)];
        var spectrum = new SpectrumMeasurement(Facts(), [], ordinates, null, 9.25, -0.1, true);
        var step = ordinates.Max(Math.Abs) / (1 << 28);

        var read = ReadBack(JcampWriter.Write(spectrum)).Real;

        Assert.NotEqual(ordinates, read);
        Assert.All(ordinates.Zip(read), pair => Assert.InRange(Math.Abs(pair.First - pair.Second), 0, 0.5000001 * step));
    }

    [Fact]
    public void An_fid_returns_with_its_time_axis_centre_and_delay()
    {
        double[] real = [.. Enumerable.Range(0, 1000).Select(i => Math.Round(1e6 * Math.Cos(i * 0.3) * Math.Exp(-i / 200.0)))];
        double[] imaginary = [.. Enumerable.Range(0, 1000).Select(i => Math.Round(1e6 * Math.Sin(i * 0.3) * Math.Exp(-i / 200.0)))];
        var fid = new FidMeasurement(Facts() with { ZeroPpmFrequencyMHz = null }, [], real, imaginary, 1 / 4807.69, 4.7012, 67.985);

        var result = MeasurementReader.Read(SpectrumFormat.JcampDx, JcampWriter.Write(fid));
        var read = Assert.IsType<FidMeasurement>(Assert.Single(result.Measurements));

        Assert.Equal(real, read.Real);
        Assert.Equal(imaginary, read.Imaginary);
        Assert.Equal((fid.DwellSeconds, 67.985), (read.DwellSeconds, read.GroupDelayPoints));
        Assert.Equal(4.7012, read.CentrePpm!.Value, 9);
    }

    [Fact]
    public void The_facts_return()
    {
        var facts = Facts() with { Title = "lot 7\r\n##END= $$ 100 %, 25 °C" };
        var read = ReadBack(JcampWriter.Write(new SpectrumMeasurement(facts, [], [1, 2, 3], null, 9, -1, true))).Facts;

        Assert.Equal(
            facts with { Labels = read.Labels, Title = "lot 7 ##END= $ $ 100 %, 25 °C" }, read with { TemperatureKelvin = facts.TemperatureKelvin });
        Assert.Equal(facts.TemperatureKelvin!.Value, read.TemperatureKelvin!.Value, 6);
    }

    [Fact]
    public void Lines_are_at_most_80_characters_and_the_packed_form_is_that_of_the_slow_twin()
    {
        s_integers.Sample(
            integers =>
            {
                var text = Encoding.UTF8.GetString(
                    JcampWriter.Write(new SpectrumMeasurement(Facts(), [], integers, null, 9, -0.25, true), OrdinateForm.DifDup, 1));
                var table = text[(text.IndexOf("(Y..Y))", StringComparison.Ordinal) + 8)..text.IndexOf("##END", StringComparison.Ordinal)];

                Assert.All(text.Split('\n'), line => Assert.InRange(line.Length, 0, 80));
                Assert.Equal(integers, ReferenceAsdfDecoder.Decode(table.Replace(".", "", StringComparison.Ordinal)));
            },
            iter: 200,
            seed: "0000KVbJm3K5");
    }

    [Fact]
    public void What_cannot_be_written_exactly_is_refused()
    {
        Assert.Throws<ArgumentException>(() => Write([1], null));
        Assert.Throws<ArgumentException>(() => Write([1, double.NaN], null));
        Assert.Throws<ArgumentException>(() => Write([1, 1e15], 1));
        Assert.Throws<ArgumentException>(() => Write([1, 2], 0));

        static byte[] Write(double[] ordinates, double? factor) =>
            JcampWriter.Write(new SpectrumMeasurement(Facts(), [], ordinates, null, 9, -1, true), OrdinateForm.DifDup, factor);
    }

    private static SpectrumMeasurement ReadBack(byte[] content)
    {
        var result = MeasurementReader.Read(SpectrumFormat.JcampDx, content);
        Assert.Null(result.Error);
        return Assert.IsType<SpectrumMeasurement>(Assert.Single(result.Measurements));
    }

    private static AcquisitionFacts Facts() => new()
    {
        Title = "written",
        Nucleus = "1H",
        ObserveFrequencyMHz = 400.1318806,
        ZeroPpmFrequencyMHz = 400.13,
        SolventLabel = "CDCl3",
        AcquisitionTimeSeconds = 4.125,
        RelaxationDelaySeconds = 30,
        Scans = 16,
        PulseAngleDegrees = 90,
        TemperatureKelvin = 298.2,
    };
}
