using System.Numerics;
using MathNet.Numerics.IntegralTransforms;
using Qc.Engine.Processing;
using Qc.Engine.Reading;

namespace Qc.Engine.Tests.Processing;

/// <summary>A made FID with everything that was done to it.</summary>
/// <param name="Fid">The FID.</param>
/// <param name="Lines">Lines of at least a tenth of the largest height: place, own height as a share of it, width.</param>
/// <param name="ZeroRadians">Phase that was put on at point 0 of the spectrum.</param>
/// <param name="FirstRadians">Phase that grows over the spectrum.</param>
/// <param name="FirstPoints">What was added to the first points after time zero: the baseline.</param>
/// <param name="LargestHeight">Height of the largest signal in the spectrum.</param>
/// <param name="SignalToNoise">Height of the largest signal over twice the noise.</param>
internal sealed record StudyCase(
    FidMeasurement Fid, (double Ppm, double Share, double WidthHertz)[] Lines, double ZeroRadians, double FirstRadians, Complex[] FirstPoints, double LargestHeight, double SignalToNoise);

/// <summary>How well a case came out.</summary>
/// <param name="WorstPhaseDegrees">Largest error of the phase at a line of at least a tenth of the largest height.</param>
/// <param name="PossiblePhaseDegrees">The least standard deviation of that error that the noise allows (Cramér–Rao).</param>
/// <param name="WorstBaseline">Largest error of the baseline over the largest height.</param>
internal sealed record StudyFigures(double WorstPhaseDegrees, double PossiblePhaseDegrees, double WorstBaseline);

/// <summary>
/// FIDs as a spectrometer of 60 to 600 MHz gives them: four to a dozen multiplets of lines 0.5 to 2.5 Hz wide, up to two broad
/// signals of 10 to 60 Hz, a digital filter whose stated delay is wrong by up to half a point (a first-order phase of up to
/// ±180 degrees), any zero-order phase, first points that are off (baselines of up to three waves, each to 1 % of the largest
/// signal), and white noise, S/N 20 to 2000.
/// </summary>
internal static class ProcessingStudy
{
    private const int StatedDelay = 64;

    public static StudyCase Make(int seed)
    {
        var random = new Random(seed);
        double frequency = 60 * Math.Pow(10, random.NextDouble());
        double sweep = frequency * (14 + (6 * random.NextDouble()));
        double centre = 4.5 + random.NextDouble();
        int points = (int)(sweep * (2.5 + (1.5 * random.NextDouble())));
        List<Decay> lines = Lines(random, frequency, centre);
        double first = Math.PI * ((2 * random.NextDouble()) - 1);
        double zero = Math.PI * ((2 * random.NextDouble()) - 1);
        int length = (int)BitOperations.RoundUpToPowerOf2((uint)(2 * points));
        double[] heights = Heights(lines, sweep);
        double largest = heights.Max();
        double ratio = 20 * Math.Pow(100, random.NextDouble());
        double sigma = largest / (2 * ratio);
        Complex[] clean = Filtered(lines, sweep, points, length, zero, first);
        var noise = new Gaussian(seed);
        double perPoint = sigma / Math.Sqrt(points);
        for (int n = 0; n < points; n++)
        {
            clean[n] += new Complex(perPoint * noise.Next(), perPoint * noise.Next());
        }

        Complex[] firstPoints = [.. Enumerable.Range(0, 4).Select(_ =>
            Complex.FromPolarCoordinates(0.01 * largest * random.NextDouble(), 2 * Math.PI * random.NextDouble()))];
        for (int j = 0; j < firstPoints.Length; j++)
        {
            clean[StatedDelay + j] += firstPoints[j];
        }

        var facts = new AcquisitionFacts { Nucleus = "1H", ObserveFrequencyMHz = frequency, ZeroPpmFrequencyMHz = frequency };
        var fid = new FidMeasurement(
            facts, [], [.. clean.Take(points).Select(c => c.Real)], [.. clean.Take(points).Select(c => c.Imaginary)], 1 / sweep, centre, StatedDelay);
        (double, double, double)[] places = [.. lines.Select(l => (centre + (l.Hertz / frequency), Height(l, sweep) / largest, l.WidthHertz)).Where(p => p.Item2 >= 0.1)];
        return new StudyCase(fid, places, zero, first, firstPoints, largest, ratio);
    }

    public static StudyFigures Judge(StudyCase made)
    {
        ProcessingOutcome outcome = SpectrumProcessor.Process(made.Fid, new ProcessingOptions());
        Spectrum spectrum = outcome.Spectrum;
        ComplexSpectrum plain = FidTransform.Transform(made.Fid);
        ProcessingStep phase = spectrum.Steps.Single(s => s.Name == "phase");
        double zero = phase.Parameters["zeroDegrees"] * Math.PI / 180;
        double first = phase.Parameters["firstDegrees"] * Math.PI / 180;
        double Left(double x) => Math.IEEERemainder(zero + made.ZeroRadians + ((first + made.FirstRadians) * x), 2 * Math.PI);
        double Along(double ppm) => (ppm - plain.FirstPpm) / plain.PpmPerPoint / plain.Points.Length;
        double worst = made.Lines.Max(p => Math.Abs(Left(Along(p.Ppm)))) * 180 / Math.PI;

        // The distortion alone, phased as the spectrum was, is the true baseline; what was taken off is the found one.
        Complex[] phased = AutoPhase.Apply(plain.Points, zero, first);
        int length = phased.Length;
        double worstBaseline = 0;
        for (int i = length / 50; i < length - (length / 50); i++)
        {
            int k = (length / 2) - 1 - i;
            Complex truth = Complex.Zero;
            for (int j = 0; j < made.FirstPoints.Length; j++)
            {
                truth += made.FirstPoints[j] * Complex.FromPolarCoordinates(1, -2 * Math.PI * k * j / length);
            }

            double expected = (truth * Complex.FromPolarCoordinates(1, zero + (first * i / length))).Real;
            worstBaseline = Math.Max(worstBaseline, Math.Abs(phased[i].Real - spectrum.Intensity[i] - expected));
        }

        return new StudyFigures(worst, Possible(made, plain, Along), worstBaseline / made.LargestHeight);
    }

    /// <summary>
    /// The phase of a Lorentzian line of height h and half width of a points is known to 2·σ²·c/(h²πa) rad², c the points over which
    /// noise is correlated, the 2 for its place, which must be found as well; a straight line through the phases of lines, as if
    /// none overlapped, carries it to the outermost.
    /// </summary>
    private static double Possible(StudyCase made, ComplexSpectrum plain, Func<double, double> along)
    {
        double hertzPerPoint = -plain.PpmPerPoint * made.Fid.Facts.ObserveFrequencyMHz;
        double correlation = (double)plain.Points.Length / made.Fid.Real.Length;
        double s0 = 0, s1 = 0, s2 = 0;
        foreach ((double ppm, double share, double width) in made.Lines)
        {
            double weight = Math.Pow(2 * made.SignalToNoise * share, 2) * Math.PI * width / (4 * hertzPerPoint * correlation);
            s0 += weight;
            s1 += weight * along(ppm);
            s2 += weight * along(ppm) * along(ppm);
        }

        double determinant = (s0 * s2) - (s1 * s1);
        return made.Lines.Max(p => Math.Sqrt((s2 - (2 * along(p.Ppm) * s1) + (along(p.Ppm) * along(p.Ppm) * s0)) / determinant)) * 180 / Math.PI;
    }

    private static List<Decay> Lines(Random random, double frequency, double centre)
    {
        double[][] patterns = [[1], [1], [1, 1], [1, 2, 1], [1, 3, 3, 1], [1, 1, 1, 1]];
        double width = 0.5 + (1.5 * random.NextDouble());
        var lines = new List<Decay>();
        int multiplets = random.Next(4, 13);
        for (int m = 0; m < multiplets; m++)
        {
            double hertz = ((0.5 + (8.5 * random.NextDouble())) - centre) * frequency;
            double[] pattern = patterns[random.Next(patterns.Length)];
            double coupling = 4 + (8 * random.NextDouble());
            double protons = random.Next(1, 10);
            double own = width * (1 + (0.25 * random.NextDouble()));
            for (int k = 0; k < pattern.Length; k++)
            {
                lines.Add(new Decay(hertz + ((k - (0.5 * (pattern.Length - 1))) * coupling), protons * pattern[k] / pattern.Sum(), own));
            }
        }

        int broad = random.Next(0, 3);
        for (int b = 0; b < broad; b++)
        {
            lines.Add(new Decay((1 + (9 * random.NextDouble()) - centre) * frequency, random.Next(1, 3), 10 + (50 * random.NextDouble())));
        }

        return lines;
    }

    private static double Height(Decay line, double sweep) => line.Amplitude * sweep / (Math.PI * line.WidthHertz);

    /// <summary>Height of the absorption at every line, its neighbours' included.</summary>
    private static double[] Heights(List<Decay> lines, double sweep) =>
        [.. lines.Select(at => lines.Sum(l => Height(l, sweep) / (1 + Math.Pow(2 * (at.Hertz - l.Hertz) / l.WidthHertz, 2))))];

    /// <summary>
    /// Points of the sum of decays, passed through a filter that is flat over 90 % of the sweep and falls by a cosine to the edges,
    /// delayed by the stated delay and a fraction of a point, and turned so that the phase is zero at point 0 of the spectrum.
    /// </summary>
    private static Complex[] Filtered(List<Decay> lines, double sweep, int points, int length, double zero, double first)
    {
        var work = new Complex[length];
        foreach (Decay line in lines)
        {
            Complex step = Complex.Exp(new Complex(-Math.PI * line.WidthHertz, 2 * Math.PI * line.Hertz) / sweep);
            Complex value = line.Amplitude;
            for (int n = 0; n < length - StatedDelay; n++)
            {
                work[n] += value * (n == 0 ? 0.5 : 1);
                value *= step;
            }
        }

        Fourier.Forward(work, FourierOptions.Matlab);
        for (int i = 0; i < length; i++)
        {
            int k = (length / 2) - 1 - i;
            double edge = (0.5 - (Math.Abs(k) / (double)length)) / 0.05;
            double pass = edge >= 1 ? 1 : 0.5 - (0.5 * Math.Cos(Math.PI * edge));
            work[(k + length) % length] *= pass * Complex.FromPolarCoordinates(
                1, (-2 * Math.PI * k * StatedDelay / length) + zero + (first * i / length));
        }

        Fourier.Inverse(work, FourierOptions.Matlab);
        return work;
    }
}
