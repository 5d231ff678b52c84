using Qc.Engine.Processing;
using Xunit;

namespace Qc.Engine.Tests.Processing;

/// <summary>Truth: the baseline that was added to lines of known shape.</summary>
public class BaselineTests
{
    [Theory]
    [InlineData(0)]
    [InlineData(1)]
    [InlineData(2)]
    public void IsFoundWithinTwoThousandthsOfTheLargestSignal(int shape)
    {
        const int Count = 32768;
        var random = new Gaussian(shape + 1);
        var values = new double[Count];
        var truth = new double[Count];
        (double Place, double Height, double Width)[] lines =
        [
            (0.2, 1000, 12), (0.23, 700, 12), (0.26, 400, 80), (0.5, 600, 12), (0.505, 900, 12), (0.51, 600, 12), (0.8, 800, 10),
        ];
        for (int i = 0; i < Count; i++)
        {
            double x = (double)i / Count;
            truth[i] = shape switch
            {
                0 => 30,
                1 => 60 * (x - 0.4) * (x - 0.4),
                _ => -25 + (20 * Math.Cos(2 * Math.PI * x)),
            };
            values[i] = truth[i] + (0.5 * random.Next());
            foreach ((double place, double height, double width) in lines)
            {
                double u = 2 * (i - (place * Count)) / width;
                values[i] += height / (1 + (u * u));
            }
        }

        double[] found = Baseline.Of(values, 0.5);
        int at = Enumerable.Range(0, Count).MaxBy(i => Math.Abs(found[i] - truth[i]));
        double worst = Math.Abs(found[at] - truth[at]);
        Assert.True(worst < 0.002 * 1000, $"off by {worst:F2} at {(double)at / Count:F3}");
    }
}
