using System.Numerics;
using MathNet.Numerics.IntegralTransforms;

namespace Qc.Engine.Processing;

/// <summary>
/// Automatic phase of S·exp(i(φ0 + φ1·x)), x from 0 (first point) to 1, for a spectrum whose signals are all positive.
/// The FID is faded in by 1 − exp(−(t/10 ms)²), so that no line, however strong, reaches far; a real gate leaves every
/// symmetric line conjugate symmetric about its centre. The signals are then taken one cluster at a time: the sum Σ S·w with
/// w = |S| less a floor has the phase of the cluster, the dispersion of a line being odd and w even, and the dispersion that
/// two lines lay under each other, a₁·a₂ at the one and −a₂·a₁ at the other, cancelling. φ1 is where the phases of all clusters agree
/// best, a periodogram over its reach with the least φ1 preferred; then both are refined by least squares, a cluster weighing
/// by the noise of its phase and by what lines that are not quite symmetric may be off, large deviations weighing less
/// (Huber 1964).
/// </summary>
internal static class AutoPhase
{
    private const double FadeInSeconds = 0.01;
    private const double FloorInNoise = 5;
    private const double FloorOfTop = 0.05;
    private const double ShapeRadians = 0.02;
    private const double HuberRadians = 0.1;
    private const int ThinPoints = 8192;
    private const double NegativeInNoise = 3;
    private const double ImperfectShare = 3e-4;
    private const double LargestStepRadians = 0.05;
    private const double SmallestStepRadians = 2e-4;

    private readonly record struct Cluster(double Place, double Phase, double Variance);

    /// <summary>Phases in radians; zero where the spectrum holds no signal.</summary>
    /// <param name="spectrum">The spectrum, from high to low frequency, of an FID filled to at least twice its length.</param>
    /// <param name="dwellSeconds">Time between the points of that FID.</param>
    /// <param name="firstOrderReachRadians">Largest φ1 that is considered.</param>
    /// <param name="firstOrderPriorRadians">Standard deviation granted to φ1 before the data are seen.</param>
    public static (double Zero, double First) Find(
        Complex[] spectrum, double dwellSeconds, double firstOrderReachRadians, double firstOrderPriorRadians)
    {
        List<Cluster> clusters = FindClusters(FadedIn(spectrum, FadeInSeconds / dwellSeconds));
        if (clusters.Count == 0)
        {
            clusters = FindClusters(spectrum);
        }

        if (clusters.Count == 0)
        {
            return (0, 0);
        }

        double step = Math.PI / 60;
        int steps = (int)Math.Ceiling(firstOrderReachRadians / step);
        double best = double.NegativeInfinity;
        double first = 0;
        for (int s = -steps; s <= steps; s++)
        {
            double trial = s * step;
            double agreement = Agreement(clusters, trial).Magnitude - (0.5 * trial * trial / (firstOrderPriorRadians * firstOrderPriorRadians));
            if (agreement > best)
            {
                (best, first) = (agreement, trial);
            }
        }

        (double zero, first) = Refine(clusters, -Agreement(clusters, first).Phase, first, firstOrderPriorRadians);
        return Polish(spectrum, clusters, zero, first, firstOrderPriorRadians);
    }

    /// <summary>
    /// Multiplets that are lopsided mislead the sums by a few degrees. Dispersion also shows as negative tails: the sum of
    /// squares of what is negative beyond the noise, in units of the noise and of a small share of the highest point, is added to the misfit
    /// of the clusters and the whole made least by shrinking steps. Without noise to speak of the tails decide, else the clusters.
    /// </summary>
    private static (double Zero, double First) Polish(
        Complex[] spectrum, List<Cluster> clusters, double zero, double first, double prior)
    {
        Complex[] thin = Thin(spectrum);
        double noise = NoiseEstimate.Of([.. thin.Select(c => c.Real)]).StandardDeviation;
        double scale = (noise * noise) + Math.Pow(ImperfectShare * thin.Max(c => c.Magnitude), 2);
        double Cost(double z, double f) =>
            (Negative(thin, z, f, NegativeInNoise * noise) / scale) + clusters.Sum(c => Misfit(c, z, f)) + (f * f / (prior * prior));

        double best = Cost(zero, first);
        for (double step = LargestStepRadians; step > SmallestStepRadians;)
        {
            bool better = false;
            foreach ((double dz, double df) in new[] { (step, 0), (-step, 0), (0, step), (0, -step), (step, -2 * step), (-step, 2 * step) })
            {
                double cost = Cost(zero + dz, first + df);
                if (cost < best)
                {
                    (best, zero, first, better) = (cost, zero + dz, first + df, true);
                }
            }

            step *= better ? 1 : 0.5;
        }

        return (zero, first);
    }

    private static double Misfit(Cluster c, double zero, double first)
    {
        double left = Math.Abs(Math.IEEERemainder(c.Phase + zero + (first * c.Place), 2 * Math.PI));
        return (left < HuberRadians ? left * left : HuberRadians * ((2 * left) - HuberRadians)) / c.Variance;
    }

    /// <summary>Sums of neighbouring points: the phase varies little over them, the tails stay.</summary>
    private static Complex[] Thin(Complex[] spectrum)
    {
        int bin = Math.Max(1, spectrum.Length / ThinPoints);
        var thin = new Complex[spectrum.Length / bin];
        for (int i = 0; i < thin.Length * bin; i++)
        {
            thin[i / bin] += spectrum[i];
        }

        return thin;
    }

    private static double Negative(Complex[] spectrum, double zero, double first, double allowed)
    {
        double sum = 0;
        Complex turn = Complex.FromPolarCoordinates(1, zero);
        Complex step = Complex.FromPolarCoordinates(1, first / spectrum.Length);
        foreach (Complex value in spectrum)
        {
            double real = (value.Real * turn.Real) - (value.Imaginary * turn.Imaginary) + allowed;
            sum += real < 0 ? real * real : 0;
            turn *= step;
        }

        return sum;
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

    private static Complex[] FadedIn(Complex[] spectrum, double points)
    {
        // From high to low frequency the forward transform leads back to the FID in its own order, up to a turn in each point.
        Complex[] time = [.. spectrum];
        Fourier.Forward(time, FourierOptions.Matlab);
        for (int n = 0; n < time.Length; n++)
        {
            time[n] *= n < time.Length / 2 ? 1 - Math.Exp(-Math.Pow(n / points, 2)) : 0;
        }

        Fourier.Inverse(time, FourierOptions.Matlab);
        return time;
    }

    private static Complex Agreement(List<Cluster> clusters, double first)
    {
        Complex sum = Complex.Zero;
        foreach (Cluster c in clusters)
        {
            sum += Complex.FromPolarCoordinates(1 / c.Variance, c.Phase + (first * c.Place));
        }

        return sum;
    }

    private static (double Zero, double First) Refine(List<Cluster> clusters, double zero, double first, double prior)
    {
        for (int round = 0; round < 20; round++)
        {
            double s0 = 0;
            double s1 = 0;
            double s2 = 1 / (prior * prior);
            double r0 = 0;
            double r1 = -first / (prior * prior);
            foreach (Cluster c in clusters)
            {
                double left = Math.IEEERemainder(c.Phase + zero + (first * c.Place), 2 * Math.PI);
                double weight = Math.Min(1, HuberRadians / Math.Max(Math.Abs(left), 1e-12)) / c.Variance;
                s0 += weight;
                s1 += weight * c.Place;
                s2 += weight * c.Place * c.Place;
                r0 -= weight * left;
                r1 -= weight * left * c.Place;
            }

            double determinant = (s0 * s2) - (s1 * s1);
            zero += ((s2 * r0) - (s1 * r1)) / determinant;
            first += ((s0 * r1) - (s1 * r0)) / determinant;
        }

        return (zero, first);
    }

    private static List<Cluster> FindClusters(Complex[] spectrum)
    {
        double[] magnitude = [.. spectrum.Select(c => c.Magnitude)];
        double noise = Math.Max(
            NoiseEstimate.Of([.. spectrum.Select(c => c.Real)]).StandardDeviation,
            1e-9 * magnitude.Max());
        var clusters = new List<Cluster>();
        foreach ((int first, int last) in FindStretches(magnitude, noise))
        {
            // What the edge of the spectrum cuts off has no phase of its own.
            if (first > 0 && last < spectrum.Length - 1)
            {
                clusters.Add(Describe(spectrum, magnitude, first, last, noise));
            }
        }

        return clusters;
    }

    /// <summary>
    /// Stretches around magnitude maxima that stay above the noise and above a share of their top, the strongest maxima
    /// first; those that touch are one.
    /// </summary>
    private static List<(int First, int Last)> FindStretches(double[] magnitude, double noise)
    {
        int[] tops = [.. Enumerable.Range(1, Math.Max(0, magnitude.Length - 2))
            .Where(i => magnitude[i] > 2 * FloorInNoise * noise && magnitude[i] > magnitude[i - 1] && magnitude[i] >= magnitude[i + 1])
            .OrderByDescending(i => magnitude[i])
            .ThenBy(i => i)];
        var owner = new double[magnitude.Length];
        foreach (int top in tops)
        {
            if (owner[top] > 0)
            {
                continue;
            }

            double floor = Floor(magnitude[top], noise);
            int first = top;
            while (first > 0 && magnitude[first - 1] > floor && owner[first - 1] == 0)
            {
                first--;
            }

            int last = top;
            while (last < magnitude.Length - 1 && magnitude[last + 1] > floor && owner[last + 1] == 0)
            {
                last++;
            }

            // A bump on the flank of a far stronger line is part of its tail.
            double beside = Math.Max(first > 0 ? owner[first - 1] : 0, last < magnitude.Length - 1 ? owner[last + 1] : 0);
            if (magnitude[top] > FloorOfTop * beside)
            {
                Array.Fill(owner, magnitude[top], first, last - first + 1);
            }
        }

        var stretches = new List<(int First, int Last)>();
        for (int i = 0; i < owner.Length; i++)
        {
            if (owner[i] > 0 && (i == 0 || owner[i - 1] == 0))
            {
                stretches.Add((i, i));
            }
            else if (owner[i] > 0)
            {
                stretches[^1] = (stretches[^1].First, i);
            }
        }

        return stretches;
    }

    private static double Floor(double top, double noise) => Math.Max(FloorInNoise * noise, FloorOfTop * top);

    private static Cluster Describe(Complex[] spectrum, double[] magnitude, int first, int last, double noise)
    {
        double floor = Floor(magnitude[first..(last + 1)].Max(), noise);
        Complex sum = Complex.Zero;
        double square = 0;
        double place = 0;
        for (int i = first; i <= last; i++)
        {
            // Zero at the ends: where noise happens to put them does not matter.
            double weight = Math.Max(0, magnitude[i] - floor);
            sum += spectrum[i] * weight;
            square += weight * weight;
            place += weight * weight * i;
        }

        double variance = noise * noise * square / Math.Max(sum.Magnitude * sum.Magnitude, 1e-300);
        return new Cluster(place / square / spectrum.Length, sum.Phase, variance + (ShapeRadians * ShapeRadians));
    }
}
