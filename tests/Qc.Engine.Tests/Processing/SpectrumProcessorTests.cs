using Qc.Engine.Processing;
using Qc.Engine.Reading;
using Xunit;

namespace Qc.Engine.Tests.Processing;

/// <summary>Truth: the lines and levels that the measurements were written from.</summary>
public class SpectrumProcessorTests
{
    private static readonly WrittenSignal[] Signals = [new(7.26, 60), new(4.1, 400), new(1.3, 900, 7, 1, 2, 1)];

    [Fact]
    public void AFlatSpectrumIsTakenAsItIs()
    {
        SpectrumMeasurement measurement = WrittenSpectrum.Of(Signals, "CDCl3");
        double[] before = [.. measurement.Real];
        ProcessingOutcome outcome = SpectrumProcessor.Process(measurement, new ProcessingOptions { PrescribedSolvent = "CDCl3" });
        Assert.Equal(before, outcome.Spectrum.Intensity);
        Assert.Equal(["reference"], outcome.Spectrum.Steps.Select(s => s.Name));
    }

    [Fact]
    public void AConstantLevelIsTakenOffAndTheFileIsLeftAlone()
    {
        double[] flat = WrittenSpectrum.Of(Signals, "CDCl3").Real;
        SpectrumMeasurement measurement = WrittenSpectrum.Of(Signals, "CDCl3", level: 40);
        double[] before = [.. measurement.Real];
        ProcessingOutcome outcome = SpectrumProcessor.Process(measurement, new ProcessingOptions { PrescribedSolvent = "CDCl3" });
        Assert.Contains(outcome.Spectrum.Steps, s => s.Name == "baseline");
        Assert.True(outcome.Spectrum.Intensity.Zip(flat, (a, b) => Math.Abs(a - b)).Max() < 1);
        Assert.Equal(before, measurement.Real);
    }

    [Fact]
    public void TheSameMeasurementGivesTheSameSpectrumToTheBit()
    {
        FidMeasurement fid = MadeFid.Of([new(1000, 1, 2), new(-700, 2, 3)], noise: 0.01, phaseDegrees: 77);
        double[] first = SpectrumProcessor.Process(fid, new ProcessingOptions()).Spectrum.Intensity;
        double[] second = SpectrumProcessor.Process(fid, new ProcessingOptions()).Spectrum.Intensity;
        Assert.Equal(first, second);
    }

    [Fact]
    public void AnFidComesOutWithItsLinesInPlaceAndInProportion()
    {
        FidMeasurement fid = MadeFid.Of([new(1000, 3, 2), new(400, 2, 3), new(-700, 1, 2)], points: 16384, noise: 0.005, phaseDegrees: -120);
        Spectrum spectrum = SpectrumProcessor.Process(fid, new ProcessingOptions()).Spectrum;
        MeasuredSignal[] signals = [.. MeasuredSignals.Find(spectrum, 22).OrderByDescending(s => s.Area).Take(3)];
        Assert.Equal([MadeFid.Ppm(1000), MadeFid.Ppm(400), MadeFid.Ppm(-700)], signals.Select(s => Math.Round(s.Maxima.MaxBy(m => m.Height).Hertz / MadeFid.FrequencyMHz, 3)));
        Assert.Equal(3, signals[0].Area / signals[2].Area, 0.03);
        Assert.Equal(2, signals[1].Area / signals[2].Area, 0.03);
    }

    /// <summary>Lines 1 Hz wide in an FID of 0.34 s: cut where a third of the signal still stands, rippled by 20 % without damping.</summary>
    [Fact]
    public void AnFidThatWasCutShortIsDampedAndSaysSo()
    {
        ProcessingOutcome outcome = SpectrumProcessor.Process(MadeFid.Of([new(800, 1, 1)], points: 1638, noise: 0.001), new ProcessingOptions());
        Assert.True(outcome.Spectrum.Steps[0].Parameters["broadeningHertz"] > 1);
        double[] y = outcome.Spectrum.Intensity;
        Assert.True(y.Min() > -0.02 * y.Max(), $"{y.Min() / y.Max()}");
        ProcessingOutcome whole = SpectrumProcessor.Process(MadeFid.Of([new(800, 1, 2)], points: 16384, noise: 0.001), new ProcessingOptions());
        Assert.Equal(0, whole.Spectrum.Steps[0].Parameters["broadeningHertz"]);
    }
}
