using Qc.Engine.Processing;
using Xunit;

namespace Qc.Engine.Tests.Processing;

/// <summary>
/// Truth: where the lines were put, by a spectrum written independently of that of the other referencing tests. Shifts and
/// couplings of solvents: Gottlieb et al. 1997, Fulmer et al. 2010.
/// </summary>
public class AxisScenarioTests
{
    private static readonly WrittenSignal[] Product =
    [
        new(8.10, 300, 8, 1, 1), new(4.12, 200, 7.1, 1, 3, 3, 1), new(1.85, 400), new(1.22, 300, 7.1, 1, 2, 1),
    ];

    [Theory]
    [InlineData(0.3)]
    [InlineData(-0.3)]
    [InlineData(0.02)]
    public void TmsPutsAWrongAxisRight(double off)
    {
        ProcessingOutcome outcome = Process([.. Product, new(0, 100), new(7.26, 60)], "CDCl3", "CDCl3", off);
        Assert.Equal("TMS", outcome.Spectrum.ReferencedBy);
        Assert.Equal(-off, outcome.Spectrum.AxisCorrectionPpm!.Value, 0.001);
        Assert.Equal("CDCl3", outcome.Spectrum.RecognisedSolvent);
        Assert.False(outcome.SolventContradiction);
    }

    [Theory]
    [InlineData("DMSO", "DMSO-d6", 2.50, 1.9)]
    [InlineData("Acetone", "acetone-d6", 2.05, 2.2)]
    [InlineData("CD3CN", "CD3CN", 1.94, 2.5)]
    [InlineData("MeOD", "CD3OD", 3.31, 1.65)]
    public void AResidualQuintetPutsAWrongAxisRight(string label, string solvent, double ppm, double hertz)
    {
        ProcessingOutcome outcome = Process([.. Product, WrittenSignal.Quintet(ppm, 150, hertz)], label, solvent, 0.3);
        Assert.Equal("residual solvent", outcome.Spectrum.ReferencedBy);
        Assert.Equal(-0.3, outcome.Spectrum.AxisCorrectionPpm!.Value, 0.001);
        Assert.Equal(solvent, outcome.Spectrum.RecognisedSolvent);
    }

    [Fact]
    public void AWrongLabelIsNoticedByTheQuintetOfDmso()
    {
        ProcessingOutcome outcome = Process([.. Product, WrittenSignal.Quintet(2.50, 150, 1.9), new(3.33, 300)], "CDCl3", "CDCl3");
        Assert.Equal("DMSO-d6", outcome.Spectrum.RecognisedSolvent);
        Assert.Equal("CDCl3", outcome.HeaderSolvent);
        Assert.True(outcome.SolventContradiction);
    }

    [Fact]
    public void AWrongLabelIsNoticedByAQuintetRunTogetherAndWater()
    {
        ProcessingOutcome outcome = Process([.. Product, WrittenSignal.Quintet(2.50, 150, 1.9), new(3.33, 300)], "CDCl3", "CDCl3", widthHertz: 3);
        Assert.Equal("DMSO-d6", outcome.Spectrum.RecognisedSolvent);
        Assert.True(outcome.SolventContradiction);
    }

    [Fact]
    public void NeitherAProductsQuintetNorRipplesAreASolvent()
    {
        WrittenSignal[] others = [new(2.45, 200, 7, 1, 4, 6, 4, 1), new(2.08, 200, 2.2, 0.8, 0.85, 0.9, 0.95, 1, 0.95, 0.9, 0.85, 0.8), new(7.26, 60)];
        ProcessingOutcome outcome = Process([.. Product, .. others], "CDCl3", "CDCl3");
        Assert.Equal("CDCl3", outcome.Spectrum.RecognisedSolvent);
        Assert.Equal(0, outcome.Spectrum.AxisCorrectionPpm);
    }

    [Fact]
    public void TmsAHundredTimesTheProductHidesNothing()
    {
        ProcessingOutcome outcome = Process([.. Product, new(0, 40_000), new(7.26, 60)], "CDCl3", "CDCl3", 0.1);
        Assert.Equal(-0.1, outcome.Spectrum.AxisCorrectionPpm!.Value, 0.001);
        Assert.Equal(1, outcome.Spectrum.NoiseStandardDeviation, 0.05);
        foreach (WrittenSignal signal in Product)
        {
            Assert.Contains(MeasuredSignals.Find(outcome.Spectrum, 22), s => Math.Abs(s.CentroidPpm - signal.Ppm) < 0.005);
        }
    }

    [Fact]
    public void WithoutAnyReferenceTheFileIsTakenAndItIsSaid()
    {
        ProcessingOutcome outcome = Process(Product, null, "CDCl3", 0.1);
        Assert.Null(outcome.Spectrum.AxisCorrectionPpm);
        Assert.Equal("file", outcome.Spectrum.ReferencedBy);
        Assert.Null(outcome.Spectrum.RecognisedSolvent);
    }

    private static ProcessingOutcome Process(
        WrittenSignal[] signals, string? label, string? prescribed, double off = 0, double widthHertz = 1) =>
        SpectrumProcessor.Process(
            WrittenSpectrum.Of(signals, label, off, widthHertz), new ProcessingOptions { PrescribedSolvent = prescribed });
}
