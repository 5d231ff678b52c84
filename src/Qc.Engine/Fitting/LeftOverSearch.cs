using System.Collections.Immutable;
using Qc.Engine.Processing;
using Qc.Engine.Values;

namespace Qc.Engine.Fitting;

/// <summary>
/// Gathers what a model leaves over into regions. The residual is looked at through a window of two line widths; it
/// counts where it exceeds noise and a stated share of the signal beside it, so that an imperfect shim is not taken for
/// another substance.
/// </summary>
internal static class LeftOverSearch
{
    private const double NoiseFactor = 5;
    private const double ShapeShare = 0.08;
    private const double MergeHertz = 12;

    /// <summary>The foot of a strong line reaches this far, with this share of its height.</summary>
    private const double FootHertz = 250;
    private const double FootShare = 0.004;

    /// <summary>Regions with net positive area, largest first.</summary>
    public static ImmutableArray<LeftOverRegion> Find(Spectrum spectrum, double[] modelled, double widthHertz)
    {
        int reach = Math.Max(1, (int)Math.Round(widthHertz / spectrum.HzPerPoint));
        double[] residual = new double[spectrum.Count];
        for (int i = 0; i < residual.Length; i++)
        {
            residual[i] = spectrum.Intensity[i] - modelled[i];
        }

        double[] seen = Mean(residual, reach);
        double[] beside = Mean(modelled, 3 * reach);
        int window = (2 * reach) + 1;
        double noise = spectrum.NoiseStandardDeviation * Math.Sqrt(Math.Min(1, spectrum.NoiseCorrelationPoints / window));
        double[] foot = FitGrid.Envelope(modelled, FootHertz / spectrum.HzPerPoint);
        var marked = new bool[residual.Length];
        for (int i = 0; i < marked.Length; i++)
        {
            marked[i] = seen[i] > (NoiseFactor * noise) + (ShapeShare * Math.Abs(beside[i])) + (FootShare * foot[i]);
        }

        return [.. Gather(spectrum, residual, marked, reach).OrderByDescending(r => r.Area)];
    }

    private static IEnumerable<LeftOverRegion> Gather(Spectrum spectrum, double[] residual, bool[] marked, int reach)
    {
        int merge = Math.Max(1, (int)(MergeHertz / spectrum.HzPerPoint));
        int i = 0;
        while (i < marked.Length)
        {
            if (!marked[i])
            {
                i++;
                continue;
            }

            int first = i;
            int last = i;
            for (int k = i; k < marked.Length && k - last <= merge; k++)
            {
                last = marked[k] ? k : last;
            }

            i = last + 1;
            int from = Math.Max(0, first - (3 * reach));
            int to = Math.Min(marked.Length - 1, last + (3 * reach));
            double area = 0;
            var maxima = ImmutableArray.CreateBuilder<double>();
            for (int k = from; k <= to; k++)
            {
                area += residual[k];
                if (marked[k] && k > 0 && k < residual.Length - 1 && residual[k] > residual[k - 1] && residual[k] >= residual[k + 1])
                {
                    maxima.Add(spectrum.Ppm(k));
                }
            }

            double uncertainty = spectrum.NoiseStandardDeviation * Math.Sqrt((to - from + 1) * spectrum.NoiseCorrelationPoints);
            if (area > NoiseFactor * uncertainty)
            {
                yield return new LeftOverRegion(
                    new Interval(spectrum.Ppm(to), spectrum.Ppm(from)), area * spectrum.HzPerPoint, maxima.ToImmutable());
            }
        }
    }

    private static double[] Mean(double[] values, int reach)
    {
        var cumulative = new double[values.Length + 1];
        for (int i = 0; i < values.Length; i++)
        {
            cumulative[i + 1] = cumulative[i] + values[i];
        }

        var mean = new double[values.Length];
        for (int i = 0; i < values.Length; i++)
        {
            int first = Math.Max(0, i - reach);
            int last = Math.Min(values.Length - 1, i + reach);
            mean[i] = (cumulative[last + 1] - cumulative[first]) / (last - first + 1);
        }

        return mean;
    }
}
