using Qc.Engine.Processing;
using Xunit;

namespace Qc.Engine.Tests.Processing;

/// <summary>Truth: the deviation and the autocorrelation of the noise that was put in.</summary>
public class NoiseEstimateTests
{
    [Theory]
    [InlineData(0, 11)]
    [InlineData(150, 12)]
    [InlineData(250, 13)]
    public void IsRightWithinFivePercentHoweverCrowdedTheSpectrum(int lineCount, int seed)
    {
        const int Count = 32768;
        const double Sigma = 3;
        double[] values = Crowd(Count, lineCount, seed);
        var noise = new Gaussian(seed);
        for (int i = 0; i < Count; i++)
        {
            values[i] += Sigma * noise.Next();
        }

        (double found, double correlation) = NoiseEstimate.Of(values);
        Assert.Equal(1, found / Sigma, 0.05);
        Assert.Equal(1, correlation, 0.3);
    }

    /// <summary>
    /// The real part of the spectrum of n complex values of white noise, filled to f·n with zeros, is that of an FID made
    /// even: n real degrees of freedom twice over, so that it stays white up to f = 2 and then correlates over f/2 points.
    /// </summary>
    [Theory]
    [InlineData(2, 21)]
    [InlineData(4, 22)]
    [InlineData(8, 23)]
    public void IsRightAfterZeroFilling(int factor, int seed)
    {
        const int Points = 16384;
        const double PerPoint = 0.7;
        FidSpectrum made = FidSpectrum.OfNoise(Points, factor * Points, PerPoint, seed);
        double[] values = made.Real;
        double[] crowd = Crowd(values.Length, 200, seed);
        for (int i = 0; i < values.Length; i++)
        {
            values[i] += crowd[i];
        }

        (double found, double correlation) = NoiseEstimate.Of(values);

        // The real part of a sum of n complex values of deviation s in each part has deviation s·√n.
        Assert.Equal(1, found / (PerPoint * Math.Sqrt(Points)), 0.05);
        Assert.Equal(0.5 * factor, correlation, 0.1 * factor);
    }

    private static double[] Crowd(int count, int lineCount, int seed)
    {
        var random = new Random(seed);
        var values = new double[count];
        for (int k = 0; k < lineCount; k++)
        {
            double place = random.NextDouble() * count;
            double height = 10_000 * random.NextDouble();
            double half = 4 + (4 * random.NextDouble());
            for (int i = 0; i < count; i++)
            {
                double u = (i - place) / half;
                values[i] += height / (1 + (u * u));
            }
        }

        return values;
    }
}
