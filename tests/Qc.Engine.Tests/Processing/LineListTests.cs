using Qc.Engine.Processing;
using Xunit;

namespace Qc.Engine.Tests.Processing;

/// <summary>Truth: the lines that spectra and FIDs were written from.</summary>
public class LineListTests
{
    [Fact]
    public void EveryLineComesBackWithinFourOfItsUncertainties()
    {
        WrittenSignal[] signals = [new(7.1, 300, 8.2, 1, 1), new(4.1, 400, 7.1, 1, 3, 3, 1), new(1.3, 900, 7.1, 1, 2, 1), new(0.9, 80)];
        Spectrum spectrum = SpectrumProcessor.Process(WrittenSpectrum.Of(signals), new ProcessingOptions()).Spectrum;
        FittedStretch[] stretches = [.. LineList.Of(spectrum)];
        Assert.Equal([2, 4, 3, 1], stretches.Select(s => s.Lines.Length));
        Assert.All(stretches, s => Assert.True(s.Converged));
        foreach ((WrittenSignal signal, FittedStretch stretch) in signals.Zip(stretches))
        {
            double[] pattern = signal.Pattern.Length == 0 ? [1] : signal.Pattern;
            FittedLine[] lines = [.. stretch.Lines.OrderBy(l => l.Hertz)];
            for (int k = 0; k < lines.Length; k++)
            {
                double hertz = (signal.Ppm * WrittenSpectrum.FrequencyMHz) + ((k - (0.5 * (pattern.Length - 1))) * signal.Hertz);
                double area = signal.Height * pattern[k] / pattern.Max() * Math.PI / 2;
                Assert.InRange((lines[k].Hertz - hertz) / lines[k].HertzDeviation, -4, 4);
                Assert.InRange((lines[k].Area - area) / lines[k].AreaDeviation, -4, 4);
                Assert.InRange((lines[k].WidthHertz - 1) / lines[k].WidthDeviation, -4, 4);
            }
        }
    }

    /// <summary>A line 1.2 widths beside one ten times its size is a shoulder: it has no maximum of its own.</summary>
    [Fact]
    public void AShoulderIsFoundByWhatIsLeftOver()
    {
        WrittenSignal[] signals = [new(4.0, 1000), new(4.0 + (1.2 / WrittenSpectrum.FrequencyMHz), 100)];
        Spectrum spectrum = SpectrumProcessor.Process(WrittenSpectrum.Of(signals), new ProcessingOptions()).Spectrum;
        FittedLine[] lines = [.. Assert.Single(LineList.Of(spectrum)).Lines.OrderBy(l => l.Hertz)];
        Assert.Equal(2, lines.Length);
        Assert.InRange((lines[1].Hertz - 2001.2) / lines[1].HertzDeviation, -4, 4);
        Assert.InRange((lines[1].Area - (50 * Math.PI)) / lines[1].AreaDeviation, -4, 4);
        Assert.True(lines[1].AreaDeviation < 15, $"{lines[1].AreaDeviation}");
    }

    /// <summary>An empty spectrum has no lines, and noise is not made into any.</summary>
    [Fact]
    public void NoiseHasNoLines() =>
        Assert.Empty(LineList.Of(SpectrumProcessor.Process(WrittenSpectrum.Of([]), new ProcessingOptions()).Spectrum));

    /// <summary>Captured share within ±k widths: CHECKVALUES 6.4, (2/π)·atan 2k.</summary>
    [Theory]
    [InlineData(3.157, 0.90)]
    [InlineData(31.828, 0.99)]
    [InlineData(318.31, 0.999)]
    [InlineData(3183.1, 0.9999)]
    public void AreaCaptureFollowsTheLorentzianFormula(double widths, double share)
    {
        var line = new FittedLine(100, 0.5, 0, 7, 0, 0, 0);
        Assert.Equal(share, line.ShareBetween(100 - (widths * 0.5), 100 + (widths * 0.5)), 0.00001);
    }

    /// <summary>
    /// The same measured: an FID is transformed and summed over ±k widths. The whole is the first point of the FID, which is known:
    /// amplitude × length / 2 in the sum over all points.
    /// </summary>
    [Theory]
    [InlineData(3.157, 0.90)]
    [InlineData(31.828, 0.99)]
    [InlineData(318.31, 0.999)]
    public void ATransformedLineIsCapturedSo(double widths, double share)
    {
        const double Width = 1.5;
        ComplexSpectrum made = FidTransform.Transform(MadeFid.Of([new(0, 1, Width)], points: 32768));
        double centre = made.Points.Length / 2.0;
        double hertzPerPoint = MadeFid.SweepHertz / made.Points.Length;
        double reach = widths * Width / hertzPerPoint;
        double sum = made.Points.Where((_, i) => Math.Abs(i - centre + 1) <= reach).Sum(c => c.Real);
        Assert.Equal(share, sum / (0.5 * made.Points.Length), 0.0006);
    }
}
