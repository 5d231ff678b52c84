using Qc.Engine.Processing;
using Xunit;

namespace Qc.Engine.Tests.Processing;

/// <summary>Truth: lines written down from their formula, and the Cramér–Rao bound.</summary>
public class LineFitTests
{
    /// <summary>
    /// Bars of ENGINE: deviation within 1.15 of the bound, bias below a third of it. From 400 draws a deviation is known to
    /// 3.5 % (1/√800) and a mean to 5 % (1/√400) of itself: an estimator at the bound keeps the bars with four standard errors
    /// to spare. Below 0.86 it would be better than is possible.
    /// </summary>
    [Theory]
    [InlineData(false, true, 10)]
    [InlineData(false, false, 10)]
    [InlineData(false, false, 10000)]
    [InlineData(true, true, 50)]
    [InlineData(true, false, 50)]
    [InlineData(true, false, 10000)]
    public void PlaceAndAreaAreAsGoodAsTheNoiseAllows(bool pair, bool widthKnown, double signalToNoise)
    {
        LineFitFigures f = LineFitStudy.Run(pair, widthKnown, signalToNoise, 400);
        Assert.Equal(0, f.Failed);
        Assert.InRange(f.PlaceDeviation, 0.86, 1.15);
        Assert.InRange(f.AreaDeviation, 0.86, 1.15);
        Assert.InRange(f.PlaceBias, -1 / 3.0, 1 / 3.0);
        Assert.InRange(f.AreaBias, -1 / 3.0, 1 / 3.0);
        Assert.InRange(f.StatedPlace, 0.95, 1.15);
        Assert.InRange(f.StatedArea, 0.95, 1.15);
    }
}
