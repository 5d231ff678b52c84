namespace Qc.Engine.Processing;

/// <summary>
/// Noise of a spectrum, robust against signals and baseline. Blocks of points are high-pass filtered by second differences
/// over a lag longer than the noise correlation; the standard deviation of a block is 1.4826 times the median absolute
/// value; the noise is the median over the quietest fifth of the blocks, corrected for having been chosen as quietest.
/// </summary>
public static class NoiseEstimate
{
    private const int Block = 256;
    private const int MaximumLag = 12;
    private const double MedianToSigma = 1.4826;

    /// <summary>Standard deviation, and over how many points the noise is correlated.</summary>
    public static (double StandardDeviation, double CorrelationPoints) Of(double[] values)
    {
        ArgumentNullException.ThrowIfNull(values);
        if (values.Length < 2 * Block)
        {
            return (Sigma(values, 0, values.Length, 1), 1);
        }

        var blocks = new List<(double Sigma, int Start)>();
        for (int start = 0; start + Block <= values.Length; start += Block)
        {
            blocks.Add((Sigma(values, start, Block, MaximumLag), start));
        }

        // Stretches of exact zeros (cut windows, fresh padding) are no noise.
        blocks.RemoveAll(b => b.Sigma <= 0);
        if (blocks.Count == 0)
        {
            return (0, 1);
        }

        blocks.Sort((a, b) => a.Sigma.CompareTo(b.Sigma));
        int quiet = Math.Max(1, blocks.Count / 5);
        double sigma = blocks[quiet / 2].Sigma;
        double correlation = Correlation(values, [.. blocks.Take(quiet).Select(b => b.Start)]);

        // The quietest tenth of blocks lies below the mean by about 1.28 standard errors of a block's estimate.
        double effective = Block / Math.Max(1, correlation);
        double selection = 1 + (1.28 * 1.17 / Math.Sqrt(2 * effective));
        return (sigma * selection, correlation);
    }

    private static double Sigma(double[] values, int start, int count, int lag)
    {
        int last = Math.Min(start + count, values.Length);
        var differences = new List<double>(count);
        for (int i = start; i + (2 * lag) < last; i++)
        {
            differences.Add(Math.Abs(values[i] - (2 * values[i + lag]) + values[i + (2 * lag)]));
        }

        if (differences.Count == 0)
        {
            return 0;
        }

        differences.Sort();

        // The variance of y[i] − 2y[i+lag] + y[i+2lag] is six times that of y.
        return MedianToSigma * differences[differences.Count / 2] / Math.Sqrt(6);
    }

    /// <summary>1 + 2 Σ of the autocorrelation of first-differenced quiet blocks is not robust; the lag-wise one of centred blocks is.</summary>
    private static double Correlation(double[] values, int[] starts)
    {
        var products = new double[MaximumLag];
        foreach (int start in starts)
        {
            double mean = 0;
            double slope = 0;
            for (int i = 0; i < Block; i++)
            {
                mean += values[start + i] / Block;
                slope += values[start + i] * (i - ((Block - 1) / 2.0));
            }

            slope /= Block * ((Block * (double)Block) - 1) / 12;
            double At(int i) => values[start + i] - mean - (slope * (i - ((Block - 1) / 2.0)));
            for (int lag = 0; lag < MaximumLag; lag++)
            {
                for (int i = 0; i + lag < Block; i++)
                {
                    products[lag] += At(i) * At(i + lag) / (Block - lag);
                }
            }
        }

        if (products[0] <= 0)
        {
            return 1;
        }

        double sum = 1;
        for (int lag = 1; lag < MaximumLag && products[lag] > 0.05 * products[0]; lag++)
        {
            sum += 2 * products[lag] / products[0];
        }

        return sum;
    }
}
