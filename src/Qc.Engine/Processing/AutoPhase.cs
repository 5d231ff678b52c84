using System.Numerics;

namespace Qc.Engine.Processing;

/// <summary>
/// Automatic phase: the real part of S·exp(i(φ0 + φ1·x)), x from 0 (first point) to 1, with the least entropy of its
/// derivative and no negative signal (Chen, Weng, Goh, Garland 2002, J. Magn. Reson. 158, 164). Searched over a grid of φ1
/// with the best φ0 for each, then refined by shrinking steps; deterministic.
/// </summary>
internal static class AutoPhase
{
    private const int SearchPoints = 8192;

    /// <summary>Phases in radians.</summary>
    public static (double Zero, double First) Find(Complex[] spectrum, double firstOrderReachRadians)
    {
        Complex[] coarse = Thin(spectrum);
        double best = double.PositiveInfinity;
        (double Zero, double First) found = (0, 0);
        double step = Math.PI / 6;
        for (double first = -firstOrderReachRadians; first <= firstOrderReachRadians + 1e-9; first += step)
        {
            for (double zero = 0; zero < 2 * Math.PI; zero += Math.PI / 9)
            {
                double cost = Cost(coarse, zero, first);
                if (cost < best)
                {
                    (best, found) = (cost, (zero, first));
                }
            }
        }

        double zeroStep = Math.PI / 12;
        double firstStep = step / 2;
        while (zeroStep > 1e-4)
        {
            bool better = false;
            foreach ((double dz, double df) in new[] { (zeroStep, 0), (-zeroStep, 0), (0, firstStep), (0, -firstStep), (zeroStep, -firstStep), (-zeroStep, firstStep) })
            {
                double cost = Cost(coarse, found.Zero + dz, found.First + df);
                if (cost < best)
                {
                    (best, found, better) = (cost, (found.Zero + dz, found.First + df), true);
                }
            }

            if (!better)
            {
                zeroStep /= 2;
                firstStep /= 2;
            }
        }

        return found;
    }

    /// <summary>Applies phases.</summary>
    public static Complex[] Apply(Complex[] spectrum, double zero, double first)
    {
        var result = new Complex[spectrum.Length];
        for (int i = 0; i < spectrum.Length; i++)
        {
            result[i] = spectrum[i] * Complex.FromPolarCoordinates(1, zero + (first * i / spectrum.Length));
        }

        return result;
    }

    /// <summary>Complex sums of neighbouring points: the phase varies little over them, the lines stay.</summary>
    private static Complex[] Thin(Complex[] spectrum)
    {
        int bin = Math.Max(1, spectrum.Length / SearchPoints);
        var thin = new Complex[spectrum.Length / bin];
        for (int i = 0; i < thin.Length; i++)
        {
            for (int k = 0; k < bin; k++)
            {
                thin[i] += spectrum[(i * bin) + k];
            }
        }

        return thin;
    }

    private static double Cost(Complex[] spectrum, double zero, double first)
    {
        int n = spectrum.Length;
        double cosine = Math.Cos(zero);
        double sine = Math.Sin(zero);
        double turnCosine = Math.Cos(first / n);
        double turnSine = Math.Sin(first / n);
        double total = 0;
        double negative = 0;
        double square = 0;
        double weighted = 0;
        double previous = 0;
        for (int i = 0; i < n; i++)
        {
            double real = (spectrum[i].Real * cosine) - (spectrum[i].Imaginary * sine);
            (cosine, sine) = ((cosine * turnCosine) - (sine * turnSine), (sine * turnCosine) + (cosine * turnSine));
            double slope = i == 0 ? 0 : Math.Abs(real - previous);
            previous = real;
            total += slope;
            weighted += slope > 0 ? slope * Math.Log(slope) : 0;
            square += real * real;
            negative += real < 0 ? real * real : 0;
        }

        double entropy = total > 0 ? Math.Log(total) - (weighted / total) : 0;
        return entropy + (40 * negative / Math.Max(square, 1e-300));
    }
}
