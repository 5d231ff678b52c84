using System.Numerics;

namespace Qc.Engine.Processing;

/// <summary>
/// Noise of a spectrum, robust against signals and baseline. The spectrum is cut into blocks of 64 points, longer ones where
/// its noise is correlated over more than two; from each a cubic is removed by least squares, and its deviation taken. Blocks of noise alone crowd around one value, those with signals
/// scatter over decades above it: the noise is the mode of the logarithms (half-sample mode: Bickel 2002, Comput. Stat. Data
/// Anal. 39, 153, from memory), refined by the mean square of the blocks near it.
/// </summary>
public static class NoiseEstimate
{
    private const int Block = 64;
    private const int LongBlock = 256;
    private const int LongestBlock = 512;
    private const int BlockPerCorrelation = 32;
    private const int CubicTerms = 4;
    private const int MaximumLag = 48;
    private const double SmallestCorrelation = 0.05;

    /// <summary>Blocks within this many of their own standard errors of the mode are taken for noise alone.</summary>
    private const double NearInErrors = 2.5;

    /// <summary>Standard deviation, and over how many points the noise is correlated (1 for white noise).</summary>
    public static (double StandardDeviation, double CorrelationPoints) Of(double[] values)
    {
        ArgumentNullException.ThrowIfNull(values);
        if (values.Length < 2 * Block)
        {
            double[] rest = Detrended(values, 0, values.Length);
            return (Math.Sqrt(MeanSquare(rest) * rest.Length / Math.Max(1, rest.Length - CubicTerms)), 1);
        }

        (double sigma, double correlation) = Of(values, Block);
        int needed = (int)Math.Min(BitOperations.RoundUpToPowerOf2((uint)(BlockPerCorrelation * correlation)), LongestBlock);
        return needed > Block && values.Length >= 8 * needed ? Of(values, needed) : (sigma, correlation);
    }

    private static (double StandardDeviation, double CorrelationPoints) Of(double[] values, int block)
    {
        double[] squares = MeanSquares(values, block);

        // Stretches of exact zeros (cut windows, fresh padding) are no noise.
        double[] logarithms = [.. squares.Where(s => s > 0).Select(s => 0.5 * Math.Log(s)).Order()];
        if (logarithms.Length == 0)
        {
            return (0, 1);
        }

        double correlation = 1;
        double square = Math.Exp(2 * HalfSampleMode(logarithms));
        for (int round = 0; round < 4; round++)
        {
            double reach = NearInErrors * Math.Sqrt(0.5 * correlation / (block - CubicTerms));
            square = NearMeanSquare(squares, square, reach);
            correlation = Correlation(values, square, reach);
        }

        // The cubic took its share of the noise away, more of it where neighbours are correlated.
        double kept = 1 - Math.Min(0.5, CubicTerms * correlation / block);
        return (Math.Sqrt(square / kept), correlation);
    }

    private static double[] MeanSquares(double[] values, int block)
    {
        var squares = new double[values.Length / block];
        for (int b = 0; b < squares.Length; b++)
        {
            squares[b] = MeanSquare(Detrended(values, b * block, block));
        }

        return squares;
    }

    private static double NearMeanSquare(double[] squares, double square, double reach)
    {
        double centre = 0.5 * Math.Log(square);
        double sum = 0;
        int count = 0;
        foreach (double s in squares)
        {
            if (s > 0 && Math.Abs((0.5 * Math.Log(s)) - centre) < reach)
            {
                sum += s;
                count++;
            }
        }

        return count == 0 ? square : sum / count;
    }

    /// <summary>The half of the sorted values that lies closest together, halved again until one or two are left.</summary>
    private static double HalfSampleMode(double[] sorted)
    {
        int first = 0;
        int count = sorted.Length;
        while (count > 2)
        {
            int half = (count + 1) / 2;
            int best = first;
            for (int i = first; i + half <= first + count; i++)
            {
                if (sorted[i + half - 1] - sorted[i] < sorted[best + half - 1] - sorted[best])
                {
                    best = i;
                }
            }

            (first, count) = (best, half);
        }

        return 0.5 * (sorted[first] + sorted[first + count - 1]);
    }

    /// <summary>1 + 2 Σ of the autocorrelation, pooled over long blocks of noise alone, up to the first lag where it has died away.</summary>
    private static double Correlation(double[] values, double square, double reach)
    {
        var products = new double[MaximumLag];
        double[] longSquares = MeanSquares(values, LongBlock);
        double centre = 0.5 * Math.Log(square);
        for (int b = 0; b < longSquares.Length; b++)
        {
            if (longSquares[b] <= 0 || Math.Abs((0.5 * Math.Log(longSquares[b])) - centre) > reach)
            {
                continue;
            }

            double[] rest = Detrended(values, b * LongBlock, LongBlock);
            for (int lag = 0; lag < MaximumLag; lag++)
            {
                for (int i = 0; i + lag < LongBlock; i++)
                {
                    products[lag] += rest[i] * rest[i + lag] / (LongBlock - lag);
                }
            }
        }

        double sum = 1;
        for (int lag = 1; lag < MaximumLag && products[lag] > SmallestCorrelation * products[0]; lag++)
        {
            sum += 2 * products[lag] / products[0];
        }

        return sum;
    }

    /// <summary>What a cubic leaves of a stretch; by Legendre polynomials made orthogonal on its points (Gram–Schmidt).</summary>
    private static double[] Detrended(double[] values, int start, int count)
    {
        double[] rest = values[start..(start + count)];
        var basis = new double[CubicTerms][];
        for (int power = 0; power < CubicTerms && power < count; power++)
        {
            var term = new double[count];
            for (int i = 0; i < count; i++)
            {
                term[i] = Math.Pow(((2.0 * i) + 1 - count) / count, power);
            }

            for (int earlier = 0; earlier < power; earlier++)
            {
                Subtract(term, basis[earlier], Dot(term, basis[earlier]));
            }

            double norm = Math.Sqrt(Dot(term, term));
            for (int i = 0; i < count; i++)
            {
                term[i] /= norm;
            }

            basis[power] = term;
            Subtract(rest, term, Dot(rest, term));
        }

        return rest;
    }

    private static void Subtract(double[] from, double[] what, double times)
    {
        for (int i = 0; i < from.Length; i++)
        {
            from[i] -= times * what[i];
        }
    }

    private static double Dot(double[] a, double[] b)
    {
        double sum = 0;
        for (int i = 0; i < a.Length; i++)
        {
            sum += a[i] * b[i];
        }

        return sum;
    }

    private static double MeanSquare(double[] values) => values.Length == 0 ? 0 : Dot(values, values) / values.Length;
}
