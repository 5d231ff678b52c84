using System.Collections.Immutable;
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
/// (Huber 1964). Last, sums of lines are fitted around the clusters (<see cref="ClusterPhase"/>), and the straight line is laid
/// through their phases.
/// </summary>
internal static class AutoPhase
{
    private const double FadeInSeconds = 0.01;
    private const double FloorInNoise = 5;
    private const double FloorOfTop = 0.05;
    private const double ShapeRadians = 0.02;
    private const double FittedShapeRadians = 0.006;
    private const double HuberRadians = 0.1;
    private const int PolishRounds = 5;
    private const double SettledRadians = 0.002;
    private const int Parts = 16;
    private const int WindowsInAPart = 4;

    /// <summary>A cluster of lines: its stretch, its centre from 0 to 1 over the spectrum, its phase.</summary>
    private readonly record struct Cluster(int First, int Last, double Place, double Phase, double Variance);

    /// <summary>Phases in radians; zero where the spectrum holds no signal.</summary>
    /// <param name="spectrum">The spectrum, from high to low frequency, of an FID filled to at least twice its length.</param>
    /// <param name="dwellSeconds">Time between the points of that FID.</param>
    /// <param name="firstOrderReachRadians">Largest φ1 that is considered.</param>
    /// <param name="firstOrderPriorRadians">Standard deviation granted to φ1 before the data are seen.</param>
    /// <param name="stride">How many times its length the FID was filled to: of so many points one is new.</param>
    public static (double Zero, double First) Find(
        Complex[] spectrum, double dwellSeconds, double firstOrderReachRadians, double firstOrderPriorRadians, int stride = 2)
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
        return Polish(spectrum, stride, clusters, zero, first, firstOrderPriorRadians);
    }

    /// <summary>
    /// Multiplets that are lopsided mislead the sums by some degrees, neighbours and what lies beneath by more. So windows around the clusters
    /// are fitted as sums of lines, each after the lines of the others were taken off, and the straight line is laid through the
    /// phases found; again until it settles, as the lines show best in phase.
    /// </summary>
    private static (double Zero, double First) Polish(
        Complex[] spectrum, int stride, List<Cluster> rough, double zero, double first, double prior)
    {
        List<FittedPhase> models = [];
        for (int round = 0; round < PolishRounds; round++)
        {
            models = Fitted(Apply(spectrum, zero, first), stride, rough, models);
            List<Cluster> whole =
            [
                .. models.Select(m => new Cluster(
                    0, 0, m.Place / spectrum.Length, m.Phase - zero - (first * m.Place / spectrum.Length), m.Variance + (FittedShapeRadians * FittedShapeRadians))),
            ];
            if (whole.Count == 0)
            {
                break;
            }

            (double newZero, double newFirst) = Refine(whole, zero, first, prior);
            double change = Math.Abs(newZero - zero) + Math.Abs(newFirst - first);
            models = [.. models.Select(m => m with { Phase = m.Phase + newZero - zero + ((newFirst - first) * m.Place / spectrum.Length) })];
            (zero, first) = (newZero, newFirst);
            if (round > 0 && change < SettledRadians)
            {
                break;
            }
        }

        return (zero, first);
    }

    /// <summary>Fits of the windows that tell most in each part of the spectrum, the surest first.</summary>
    /// <param name="phased">The spectrum as it is phased so far.</param>
    /// <param name="stride">How many times its length the FID was filled to.</param>
    /// <param name="rough">Where there are lines.</param>
    /// <param name="before">Fits of the round before, turned with the spectrum.</param>
    private static List<FittedPhase> Fitted(Complex[] phased, int stride, List<Cluster> rough, List<FittedPhase> before)
    {
        double noise = NoiseEstimate.Of([.. phased.Select(c => c.Real)]).StandardDeviation;
        IEnumerable<PhaseWindow> windows = rough.Select(c => PhaseWindow.Of(phased, c.First, c.Last, c.Variance, noise));
        PhaseWindow[] chosen =
        [
            .. PhaseWindow.Merge(windows, phased.Length)
                .GroupBy(w => (w.First + w.Last) * Parts / (2 * phased.Length))
                .SelectMany(g => g.OrderBy(w => w.Variance).ThenBy(w => w.First).Take(WindowsInAPart))
                .OrderBy(w => w.Variance).ThenBy(w => w.First),
        ];
        List<FittedPhase> models = [.. before];
        var fitted = new List<FittedPhase>();
        foreach (PhaseWindow w in chosen)
        {
            Complex[] values = phased[w.First..(w.Last + 1)];
            models.RemoveAll(m => m.Place >= w.First && m.Place <= w.Last);
            models.ForEach(m => m.TakeOff(values, w.First));
            if (ClusterPhase.Of(values, w.First, stride, w.Lines, noise) is { } found && found.Lines.Any(l => l.Height > 0))
            {
                fitted.Add(found);
                models.Add(found);
            }
        }

        return fitted;
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
        return new Cluster(first, last, place / square / spectrum.Length, sum.Phase, variance + (ShapeRadians * ShapeRadians));
    }
}
