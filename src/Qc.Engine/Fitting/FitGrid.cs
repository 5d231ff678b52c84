using Qc.Engine.Processing;
using Qc.Engine.Values;

namespace Qc.Engine.Fitting;

/// <summary>
/// The points that a fit looks at: chosen stretches of the spectrum, thinned where the lines are much wider than the
/// point spacing, each with its weight. Hz are counted from 0 ppm.
/// </summary>
internal sealed class FitGrid
{
    /// <summary>Points per block; supports of columns are kept block by block.</summary>
    public const int BlockSize = 64;

    /// <summary>How fast the envelope of the local signal falls, at least.</summary>
    private const double EnvelopeHertz = 5;

    /// <summary>The foot of a line (shim, truncation, phase) reaches further, with a small share of its height.</summary>
    private const double FootHertz = 60;
    private const double FootShare = 0.15;

    private FitGrid(double[] hertz, double[] intensity, double[] weight)
    {
        Hertz = hertz;
        Intensity = intensity;
        Weight = weight;
    }

    /// <summary>Positions in Hz, descending.</summary>
    public double[] Hertz { get; }

    /// <summary>Measured intensity per Hz (so that areas are in intensity units times Hz).</summary>
    public double[] Intensity { get; }

    /// <summary>Square root of the statistical weight of each point.</summary>
    public double[] Weight { get; }

    /// <summary>Number of points.</summary>
    public int Count => Hertz.Length;

    /// <summary>Number of blocks.</summary>
    public int BlockCount => (Count + BlockSize - 1) / BlockSize;

    /// <summary>
    /// Lays the grid. The variance of a point is noise² + (misfitShare × local signal)², because an imperfect shim must
    /// not be taken for another substance. The local signal is the envelope of the neighbouring intensities, falling off
    /// exponentially over a few line widths: the foot of a strong line is known no better than its shape.
    /// </summary>
    /// <param name="spectrum">The spectrum, broadened already where the fit is coarse.</param>
    /// <param name="intensity">Intensities at the points of the spectrum.</param>
    /// <param name="stretchesPpm">Stretches to look at, not overlapping.</param>
    /// <param name="widthHertz">Width of the lines at this stage.</param>
    /// <param name="noise">Standard deviation of the noise at this stage.</param>
    /// <param name="misfitShare">Share of the local signal that line-shape faults may amount to.</param>
    public static FitGrid Lay(
        Spectrum spectrum, double[] intensity, IReadOnlyList<Interval> stretchesPpm, double widthHertz, double noise, double misfitShare)
    {
        double hertzPerPoint = spectrum.HzPerPoint;
        int thinning = Math.Max(1, (int)(widthHertz / (5 * hertzPerPoint)));
        double correlation = Math.Max(1, spectrum.NoiseCorrelationPoints / thinning);
        double[] near = Envelope(intensity, Math.Max(EnvelopeHertz, 5 * widthHertz) / hertzPerPoint);
        double[] far = Envelope(intensity, Math.Max(FootHertz, 20 * widthHertz) / hertzPerPoint);
        var hertz = new List<double>();
        var values = new List<double>();
        var weights = new List<double>();
        foreach (Interval stretch in stretchesPpm.OrderByDescending(s => s.High))
        {
            int first = Math.Max(0, (int)Math.Ceiling(spectrum.IndexOf(stretch.High)));
            int last = Math.Min(spectrum.Count - 1, (int)Math.Floor(spectrum.IndexOf(stretch.Low)));
            for (int i = first; i <= last; i += thinning)
            {
                double misfit = misfitShare * Math.Max(near[i], FootShare * far[i]);
                hertz.Add(spectrum.Ppm(i) * spectrum.FrequencyMHz);
                values.Add(intensity[i]);
                weights.Add(1 / Math.Sqrt(correlation * ((noise * noise) + (misfit * misfit))));
            }
        }

        return new FitGrid([.. hertz], [.. values], [.. weights]);
    }

    /// <summary>Largest neighbouring magnitude, discounted by exp(−distance/fall).</summary>
    internal static double[] Envelope(double[] intensity, double fallPoints)
    {
        double keep = Math.Exp(-1 / fallPoints);
        var envelope = new double[intensity.Length];
        double running = 0;
        for (int i = 0; i < intensity.Length; i++)
        {
            running = Math.Max(Math.Abs(intensity[i]), running * keep);
            envelope[i] = running;
        }

        running = 0;
        for (int i = intensity.Length - 1; i >= 0; i--)
        {
            running = Math.Max(Math.Abs(intensity[i]), running * keep);
            envelope[i] = Math.Max(envelope[i], running);
        }

        return envelope;
    }

    /// <summary>Range of grid indices whose positions lie within a distance of a position; empty when none does.</summary>
    public (int First, int End) Around(double positionHertz, double reachHertz)
    {
        int first = FirstAtOrBelow(positionHertz + reachHertz);
        int end = FirstAtOrBelow(positionHertz - reachHertz);
        return (first, end);
    }

    /// <summary>Range of grid indices from a low to a high position.</summary>
    public (int First, int End) Between(double lowHertz, double highHertz) =>
        (FirstAtOrBelow(highHertz), FirstAtOrBelow(lowHertz));

    private int FirstAtOrBelow(double positionHertz)
    {
        int low = 0;
        int high = Hertz.Length;
        while (low < high)
        {
            int middle = (low + high) / 2;
            if (Hertz[middle] > positionHertz)
            {
                low = middle + 1;
            }
            else
            {
                high = middle;
            }
        }

        return low;
    }
}
