namespace Qc.Engine.Processing;

/// <summary>
/// Smooth baseline by penalised least squares with signals masked: minimise Σ w (y − z)² + λ Σ (Δ²z)² (Eilers 2003, Anal.
/// Chem. 75, 3631). Stretches that vary more than the noise have next to no weight; the others lose theirs by a logistic rule
/// of their distance from z in units of the spread below z, sooner above z than below it (after Baek et al. 2015, Analyst 140,
/// 250, from memory), as signals are positive but the foot of a badly phased line is not baseline either. Solved on a thinned
/// grid, so that time is linear in the points.
/// </summary>
public static class Baseline
{
    private const int Rounds = 20;

    /// <summary>Waves down to an eighth of the spectrum are followed: gain 1/(1 + λω⁴), ω = 2π/period, which is 1/2 there.</summary>
    private const double LambdaScale = 30;
    private const double PositiveReach = 2.5;
    private const double NegativeReach = 4;
    private const double SmallestQuietShare = 0.05;

    /// <summary>The baseline at every point.</summary>
    /// <param name="values">The spectrum.</param>
    /// <param name="noise">Standard deviation of its noise.</param>
    /// <param name="knots">Number of grid points; features narrower than a tenth of the spectrum are not followed.</param>
    public static double[] Of(double[] values, double noise, int knots = 400)
    {
        ArgumentNullException.ThrowIfNull(values);
        int bin = Math.Max(1, values.Length / knots);
        int count = (values.Length + bin - 1) / bin;
        var y = new double[count];
        for (int k = 0; k < count; k++)
        {
            y[k] = Median(values, k * bin, Math.Min((k + 1) * bin, values.Length));
        }

        double lambda = Math.Pow(count / LambdaScale, 4);
        double[] allowed = QuietWeights(values, bin, count, noise);
        double[] weight = [.. allowed];
        double[] z = y;
        double floor = Math.Max(noise / Math.Sqrt(bin), 1e-300);
        for (int round = 0; round < Rounds; round++)
        {
            z = Smooth(y, weight, lambda);
            double spread = Math.Max(floor, SpreadBelow(y, z));
            for (int k = 0; k < count; k++)
            {
                double t = (y[k] - z[k]) / spread;
                weight[k] = allowed[k] / (1 + Math.Exp(Math.Min(60, 2 * (t <= 0 ? -t - NegativeReach : t - PositiveReach))));
            }
        }

        return Interpolate(z, bin, values.Length);
    }

    /// <summary>
    /// To begin with only stretches that vary no more than the noise count; where there are next to none, all do. A spectrum
    /// without noise (a calculated one) has none either.
    /// </summary>
    private static double[] QuietWeights(double[] values, int bin, int count, double noise)
    {
        var weight = new double[count];
        int quiet = 0;
        for (int k = 0; k < count; k++)
        {
            int from = k * bin;
            int to = Math.Min((k + 1) * bin, values.Length);
            double mean = 0;
            for (int i = from; i < to; i++)
            {
                mean += values[i] / (to - from);
            }

            double square = 0;
            for (int i = from; i < to; i++)
            {
                square += (values[i] - mean) * (values[i] - mean) / (to - from);
            }

            bool isQuiet = square < 2 * noise * noise;
            weight[k] = isQuiet ? 1 : 1e-6;
            quiet += isQuiet ? 1 : 0;
        }

        if (quiet < SmallestQuietShare * count)
        {
            Array.Fill(weight, 1);
        }

        return weight;
    }

    private static double SpreadBelow(double[] y, double[] z)
    {
        double sum = 0;
        int n = 0;
        for (int k = 0; k < y.Length; k++)
        {
            double r = y[k] - z[k];
            if (r < 0)
            {
                sum += r * r;
                n++;
            }
        }

        return n == 0 ? 0 : Math.Sqrt(sum / n);
    }

    private static double Median(double[] values, int from, int to)
    {
        double[] part = values[from..to];
        Array.Sort(part);
        return part[part.Length / 2];
    }

    /// <summary>Solves (W + λ D₂ᵀD₂) z = W y, a pentadiagonal system, by LDLᵀ.</summary>
    private static double[] Smooth(double[] y, double[] w, double lambda)
    {
        int n = y.Length;
        var diagonal = new double[n];
        var first = new double[n];
        var second = new double[n];
        for (int i = 0; i < n; i++)
        {
            diagonal[i] = w[i];
        }

        for (int i = 0; i + 2 < n; i++)
        {
            diagonal[i] += lambda;
            diagonal[i + 1] += 4 * lambda;
            diagonal[i + 2] += lambda;
            first[i] -= 2 * lambda;
            first[i + 1] -= 2 * lambda;
            second[i] += lambda;
        }

        var d = new double[n];
        var e = new double[n];
        var f = new double[n];
        var z = new double[n];
        for (int i = 0; i < n; i++)
        {
            double before = i > 0 ? e[i - 1] : 0;
            double twoBefore = i > 1 ? f[i - 2] : 0;
            d[i] = diagonal[i] - (i > 0 ? d[i - 1] * before * before : 0) - (i > 1 ? d[i - 2] * twoBefore * twoBefore : 0);
            double cross = i > 0 ? d[i - 1] * before * f[i - 1] : 0;
            e[i] = i + 1 < n ? (first[i] - cross) / d[i] : 0;
            f[i] = i + 2 < n ? second[i] / d[i] : 0;
            z[i] = (w[i] * y[i]) - (i > 0 ? before * z[i - 1] : 0) - (i > 1 ? twoBefore * z[i - 2] : 0);
        }

        for (int i = 0; i < n; i++)
        {
            z[i] /= d[i];
        }

        for (int i = n - 2; i >= 0; i--)
        {
            z[i] -= (e[i] * z[i + 1]) + (i + 2 < n ? f[i] * z[i + 2] : 0);
        }

        return z;
    }

    private static double[] Interpolate(double[] z, int bin, int length)
    {
        var full = new double[length];
        for (int i = 0; i < length; i++)
        {
            double place = ((i + 0.5) / bin) - 0.5;
            int k = Math.Clamp((int)Math.Floor(place), 0, Math.Max(0, z.Length - 2));
            double fraction = Math.Clamp(place - k, 0, 1);
            full[i] = z.Length == 1 ? z[0] : ((1 - fraction) * z[k]) + (fraction * z[k + 1]);
        }

        return full;
    }
}
