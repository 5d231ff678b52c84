using Qc.Engine.Processing;

namespace Qc.Engine.Tests.Processing;

/// <summary>What many fits of the same lines under fresh noise gave, in units of the least deviation that is possible.</summary>
/// <param name="PlaceDeviation">Standard deviation of the place over its Cramér–Rao bound.</param>
/// <param name="AreaDeviation">The same of the area.</param>
/// <param name="PlaceBias">Mean error of the place over the bound.</param>
/// <param name="AreaBias">The same of the area.</param>
/// <param name="StatedPlace">Root mean square of the uncertainty that the fits state for the place, over the bound.</param>
/// <param name="StatedArea">The same of the area.</param>
/// <param name="Failed">Fits that did not converge.</param>
internal sealed record LineFitFigures(
    double PlaceDeviation, double AreaDeviation, double PlaceBias, double AreaBias, double StatedPlace, double StatedArea, int Failed);

/// <summary>
/// Fits lines of known place, width and area under white noise, and compares with the Cramér–Rao bound (Rao 1945; Cramér
/// 1946): the inverse of JᵀJ/σ², J here by central differences of the plain Lorentzian formula, apart from the routine's own.
/// The lines are 1 Hz wide, 8 points to a width, in a window of 33 Hz; S/N is the height of a line over σ. The fits
/// start up to a fifth of a width beside the places, with widths up to a fifth wrong. The worse line of a pair counts.
/// </summary>
internal static class LineFitStudy
{
    private const double FrequencyMHz = 400;
    private const double StepHertz = 0.125;
    private const int Count = 265;
    private const double WidthHertz = 1;

    public static LineFitFigures Run(bool pair, bool widthKnown, double signalToNoise, int draws)
    {
        // Not on a point, nor half way between two.
        double[] places = pair ? [0.5 + 0.03, -0.5 + 0.03] : [0.03];
        double[] areas = pair ? [1, 0.7] : [1];
        double[] heights = [.. areas.Select(a => 2 * a / (Math.PI * WidthHertz))];
        double noise = heights.Min() / signalToNoise;
        double[] truth = [.. places, .. areas, .. widthKnown ? [] : areas.Select(_ => WidthHertz)];
        double[] bound = Bound(truth, places.Length, widthKnown, noise);
        var errors = new List<double[]>();
        var stated = new List<double[]>();
        int failed = 0;
        var gaussian = new Gaussian(1);
        var start = new Random(2);
        for (int draw = 0; draw < draws; draw++)
        {
            FittedStretch fit = FitOnce(truth, places.Length, widthKnown, noise, gaussian, start);
            failed += fit.Converged ? 0 : 1;
            errors.Add([.. fit.Lines.Select((l, k) => l.Hertz - places[k]), .. fit.Lines.Select((l, k) => l.Area - areas[k])]);
            stated.Add([.. fit.Lines.Select(l => l.HertzDeviation), .. fit.Lines.Select(l => l.AreaDeviation)]);
        }

        int n = places.Length;
        double Worst(int from, Func<int, double> of) => Enumerable.Range(from, n).Select(of).MaxBy(Math.Abs);
        double Mean(int i) => errors.Average(e => e[i]);
        double Deviation(int i) => Math.Sqrt(errors.Sum(e => Math.Pow(e[i] - Mean(i), 2)) / (draws - 1)) / bound[i];
        double Bias(int i) => Mean(i) / bound[i];
        double Stated(int i) => Math.Sqrt(stated.Average(s => s[i] * s[i])) / bound[i];
        return new LineFitFigures(
            Worst(0, Deviation), Worst(n, Deviation), Worst(0, Bias), Worst(n, Bias), Worst(0, Stated), Worst(n, Stated), failed);
    }

    private static FittedStretch FitOnce(double[] truth, int lines, bool widthKnown, double noise, Gaussian gaussian, Random start)
    {
        var values = new double[Count];
        for (int i = 0; i < Count; i++)
        {
            values[i] = Model(truth, lines, X(i)) + (noise * gaussian.Next());
        }

        var spectrum = new Spectrum
        {
            Nucleus = "1H",
            FrequencyMHz = FrequencyMHz,
            Intensity = values,
            FirstPpm = X(0) / FrequencyMHz,
            PpmPerPoint = -StepHertz / FrequencyMHz,
            NoiseStandardDeviation = noise,
        };
        LineStart[] starts =
        [
            .. Enumerable.Range(0, lines).Select(k => new LineStart(
                truth[k] + (0.2 * ((2 * start.NextDouble()) - 1)), WidthHertz * (1 + (0.2 * ((2 * start.NextDouble()) - 1))))),
        ];
        return LineFit.Fit(spectrum, 0, Count - 1, starts, new LineFitOptions { KnownWidthHertz = widthKnown ? WidthHertz : null });
    }

    private static double X(int i) => ((Count / 2) - i) * StepHertz;

    private static double Model(double[] p, int lines, double x)
    {
        double sum = 0;
        for (int k = 0; k < lines; k++)
        {
            double w = p.Length > 2 * lines ? p[(2 * lines) + k] : WidthHertz;
            sum += p[lines + k] * w / (2 * Math.PI) / (Math.Pow(x - p[k], 2) + (w * w / 4));
        }

        return sum;
    }

    private static double[] Bound(double[] truth, int lines, bool widthKnown, double noise)
    {
        int n = truth.Length;
        var fisher = new double[n, n];
        for (int i = 0; i < Count; i++)
        {
            double[] slope = [.. Enumerable.Range(0, n).Select(j => Slope(truth, lines, j, X(i)))];
            for (int a = 0; a < n; a++)
            {
                for (int b = 0; b < n; b++)
                {
                    fisher[a, b] += slope[a] * slope[b] / (noise * noise);
                }
            }
        }

        var inverse = MathNet.Numerics.LinearAlgebra.Matrix<double>.Build.DenseOfArray(fisher).Inverse();
        return [.. Enumerable.Range(0, n).Select(i => Math.Sqrt(inverse[i, i]))];
    }

    private static double Slope(double[] truth, int lines, int j, double x)
    {
        const double Step = 1e-5;
        double[] up = [.. truth];
        double[] down = [.. truth];
        up[j] += Step;
        down[j] -= Step;
        return (Model(up, lines, x) - Model(down, lines, x)) / (2 * Step);
    }
}
