using Qc.Engine.Processing;
using Xunit;

namespace Qc.Engine.Tests.Processing;

/// <summary>Truth: the shifts at which the lines were put, and the error that was put on the axis.</summary>
public class ReferencingTests
{
    private const double AxisError = 0.3;

    [Fact]
    public void AnAxisThatIsOffIsPutRightByTmsWithChloroformAtTheRightDistance()
    {
        MadeSpectrum made = new MadeSpectrum(axisErrorPpm: AxisError).Product().Line(7.26, 10).Line(0, 30);
        AssertCorrected(made.Process("CDCl3", "CDCl3"), "TMS");
    }

    [Fact]
    public void WhereNobodyNamesASolventALineThatIsOffZeroIsNotTakenForTms()
    {
        MadeSpectrum made = new MadeSpectrum(axisErrorPpm: AxisError).Product().Line(7.26, 10).Line(0, 30);
        Assert.Null(made.Process(null, null).Spectrum.AxisCorrectionPpm);
    }

    [Fact]
    public void TmsIsToldFromSiliconeGreaseOnAnAxisThatIsOff()
    {
        MadeSpectrum made = new MadeSpectrum(axisErrorPpm: AxisError).Product().Line(7.26, 10).Line(0, 10).Line(0.07, 60);
        AssertCorrected(made.Process("CDCl3"), "TMS");
    }

    [Fact]
    public void AnAxisThatIsOffIsPutRightByTheQuintetOfTheSolvent()
    {
        AssertCorrected(new MadeSpectrum(axisErrorPpm: AxisError).Product().Dmso().Process("DMSO"), "residual solvent");
    }

    [Fact]
    public void AnAxisThatIsOffIsPutRightByChloroformOnlyIfItsWaterIsOffToo()
    {
        MadeSpectrum Made() => new MadeSpectrum(axisErrorPpm: AxisError).Product().Line(7.26, 10);
        AssertCorrected(Made().Line(1.56, 10, 2).Process("CDCl3"), "residual solvent");
        Spectrum left = Made().Process("CDCl3").Spectrum;
        Assert.Null(left.AxisCorrectionPpm);
        Assert.Equal("file", left.ReferencedBy);
    }

    [Fact]
    public void TmsAHundredTimesTheProductReferencesWithinAThousandth()
    {
        MadeSpectrum made = new MadeSpectrum(axisErrorPpm: 0.012).Product().Line(7.26, 10)
            .Multiplet(0, 10000 * 0.0235, 6.6, [1, 1]).Line(0, 10000);
        Spectrum spectrum = made.Process("CDCl3").Spectrum;
        Assert.Equal("TMS", spectrum.ReferencedBy);
        Assert.Equal(-0.012, spectrum.AxisCorrectionPpm!.Value, 1e-4);
        Assert.Equal(0.05, spectrum.NoiseStandardDeviation, 0.005);
    }

    [Theory]
    [InlineData(0.07)]
    [InlineData(0.22)]
    public void GreaseOrASilylGroupOfTheProductIsNotTms(double ppm)
    {
        Spectrum spectrum = new MadeSpectrum().Product().Line(7.26, 10).Line(ppm, 80).Process("CDCl3").Spectrum;
        Assert.Equal("residual solvent", spectrum.ReferencedBy);
        Assert.Equal(0.0, spectrum.AxisCorrectionPpm);
    }

    /// <summary>Chloroform lies at 7.20 to 7.29 with concentration; that says nothing of the axis.</summary>
    [Theory]
    [InlineData(7.205)]
    [InlineData(7.285)]
    public void ChloroformMovedByConcentrationDoesNotMoveTheAxis(double ppm)
    {
        Spectrum spectrum = new MadeSpectrum().Product().Line(ppm, 10).Process("CDCl3").Spectrum;
        Assert.Equal("CDCl3", spectrum.RecognisedSolvent);
        Assert.Equal(0.0, spectrum.AxisCorrectionPpm);
    }

    [Fact]
    public void ChloroformUnderAromaticProtonsIsNotTaken()
    {
        Spectrum spectrum = new MadeSpectrum().Product().Line(7.262, 10).Multiplet(7.25, 60, 7.5, [1, 2, 1]).Process("CDCl3").Spectrum;
        Assert.Null(spectrum.AxisCorrectionPpm);
        Assert.Null(spectrum.RecognisedSolvent);
    }

    [Fact]
    public void WaterDoesNotReferenceHeavyWaterButDssDoes()
    {
        MadeSpectrum Made() => new MadeSpectrum(axisErrorPpm: -0.08).Product().Line(4.72, 200, 3);
        Spectrum bare = Made().Process("D2O").Spectrum;
        Assert.Equal("D2O", bare.RecognisedSolvent);
        Assert.Null(bare.AxisCorrectionPpm);
        Spectrum withDss = Made().Line(0, 30).Process("D2O").Spectrum;
        Assert.Equal("DSS", withDss.ReferencedBy);
        Assert.Equal(0.08, withDss.AxisCorrectionPpm!.Value, 1e-3);
    }

    private static void AssertCorrected(ProcessingOutcome outcome, string by)
    {
        Assert.Equal(by, outcome.Spectrum.ReferencedBy);
        Assert.Equal(-AxisError, outcome.Spectrum.AxisCorrectionPpm!.Value, 1e-3);
        Assert.Equal(11, outcome.Spectrum.FirstPpm, 1e-3);
        Assert.False(outcome.SolventContradiction);
    }
}
