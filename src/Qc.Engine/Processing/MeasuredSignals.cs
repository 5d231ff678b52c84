using System.Collections.Immutable;
using Qc.Engine.Values;

namespace Qc.Engine.Processing;

/// <summary>A maximum of the spectrum that stands out of its surroundings.</summary>
/// <param name="Hertz">Position from 0 ppm.</param>
/// <param name="Height">Intensity at the top.</param>
/// <param name="Prominence">Height above the higher of the two valleys beside it.</param>
/// <param name="WidthHertz">Full width at half prominence.</param>
internal readonly record struct Maximum(double Hertz, double Height, double Prominence, double WidthHertz);

/// <summary>Neighbouring maxima that may belong to one multiplet, or to several that overlap.</summary>
/// <param name="Ppm">Extent, tails included as far as they stand out.</param>
/// <param name="Area">Area in intensity × Hz.</param>
/// <param name="CentroidPpm">Centre of gravity.</param>
/// <param name="RmsHertz">Root mean square distance of the maxima from the centroid, weighted by height.</param>
/// <param name="Maxima">The maxima, from high to low ppm.</param>
internal sealed record MeasuredSignal(
    Interval Ppm, double Area, double CentroidPpm, double RmsHertz, ImmutableArray<Maximum> Maxima)
{
    /// <summary>Distance between the outermost maxima in Hz.</summary>
    public double SpanHertz => Maxima[0].Hertz - Maxima[^1].Hertz;

    /// <summary>
    /// Maxima above 4 % of the highest: without 13C satellites (0.55 %), spinning side bands and small signals in the feet.
    /// </summary>
    public ImmutableArray<Maximum> StrongMaxima
    {
        get
        {
            double least = 0.04 * Maxima.Max(m => m.Height);
            return [.. Maxima.Where(m => m.Height >= least)];
        }
    }

    /// <summary>Distance between the outermost strong maxima in Hz.</summary>
    public double StrongSpanHertz
    {
        get
        {
            ImmutableArray<Maximum> strong = StrongMaxima;
            return strong[0].Hertz - strong[^1].Hertz;
        }
    }
}

/// <summary>Finds the signals of a spectrum. Thresholds are in noise units: nothing is scaled to the highest line.</summary>
internal static class MeasuredSignals
{
    private const double ProminenceInNoise = 6;
    private const double ProminenceOfHeight = 0.004;

    /// <summary>All signals from high to low ppm.</summary>
    /// <param name="spectrum">The spectrum.</param>
    /// <param name="gapHertz">Maxima further apart than this belong to different signals.</param>
    public static ImmutableArray<MeasuredSignal> Find(Spectrum spectrum, double gapHertz)
    {
        List<(int Index, Maximum Top)> maxima = FindMaxima(spectrum);
        var signals = new List<MeasuredSignal>();
        int start = 0;
        while (start < maxima.Count)
        {
            int end = start + 1;
            while (end < maxima.Count && maxima[end - 1].Top.Hertz - maxima[end].Top.Hertz < Gap(maxima[end - 1].Top, maxima[end].Top, gapHertz))
            {
                end++;
            }

            int lowest = start == 0 ? 0 : LowestBetween(spectrum.Intensity, maxima[start - 1].Index, maxima[start].Index);
            int highest = end == maxima.Count ? spectrum.Count - 1 : LowestBetween(spectrum.Intensity, maxima[end - 1].Index, maxima[end].Index);
            signals.Add(Describe(spectrum, maxima.GetRange(start, end - start), lowest, highest));
            start = end;
        }

        return [.. signals.Where(s => s.Area > 0)];
    }

    private static double Gap(Maximum a, Maximum b, double gapHertz) => gapHertz + (0.5 * (a.WidthHertz + b.WidthHertz));

    private static List<(int Index, Maximum Top)> FindMaxima(Spectrum spectrum)
    {
        double[] y = spectrum.Intensity;
        double noise = spectrum.NoiseStandardDeviation;
        var tops = new List<int>();
        for (int i = 1; i < y.Length - 1; i++)
        {
            if (y[i] > 4 * noise && y[i] > y[i - 1] && y[i] >= y[i + 1])
            {
                tops.Add(i);
            }
        }

        var kept = new List<(int, Maximum)>();
        foreach (int top in tops)
        {
            double needed = Math.Max(ProminenceInNoise * noise, ProminenceOfHeight * y[top]);
            double left = Valley(y, top, -1, noise);
            double right = Valley(y, top, 1, noise);
            double prominence = y[top] - Math.Max(left, right);
            if (prominence < needed)
            {
                continue;
            }

            double half = y[top] - (0.5 * prominence);
            double width = (HalfWidth(y, top, -1, half) + HalfWidth(y, top, 1, half)) * spectrum.HzPerPoint;
            double curvature = y[top - 1] - (2 * y[top]) + y[top + 1];
            double shift = curvature < 0 ? 0.5 * (y[top - 1] - y[top + 1]) / curvature : 0;
            kept.Add((top, new Maximum(spectrum.Ppm(top + shift) * spectrum.FrequencyMHz, y[top], prominence, width)));
        }

        return kept;
    }

    /// <summary>Lowest point on one side before the curve rises above the top; the search ends where the curve is down in the noise.</summary>
    private static double Valley(double[] y, int top, int direction, double noise)
    {
        double lowest = y[top];
        for (int i = top + direction; i >= 0 && i < y.Length; i += direction)
        {
            if (y[i] > y[top])
            {
                return lowest;
            }

            lowest = Math.Min(lowest, y[i]);
            if (lowest <= noise)
            {
                return lowest;
            }
        }

        return lowest;
    }

    private static double HalfWidth(double[] y, int top, int direction, double half)
    {
        int i = top;
        while (i + direction >= 0 && i + direction < y.Length && y[i] > half)
        {
            i += direction;
        }

        if (i == top)
        {
            return 0.5;
        }

        double above = y[i - direction];
        double fraction = above > y[i] ? (above - half) / (above - y[i]) : 1;
        return Math.Abs(i - direction - top) + Math.Clamp(fraction, 0, 1);
    }

    private static int LowestBetween(double[] y, int first, int last)
    {
        int lowest = first;
        for (int i = first; i <= last; i++)
        {
            if (y[i] < y[lowest])
            {
                lowest = i;
            }
        }

        return lowest;
    }

    private static MeasuredSignal Describe(Spectrum spectrum, List<(int Index, Maximum Top)> maxima, int lowest, int highest)
    {
        double noise = spectrum.NoiseStandardDeviation;
        double width = maxima.Max(m => m.Top.WidthHertz);
        int reach = (int)Math.Ceiling(Math.Max(12 * Math.Max(0.8, width), 6) / spectrum.HzPerPoint);
        int first = Math.Max(lowest, maxima[0].Index - reach);
        int last = Math.Min(highest, maxima[^1].Index + reach);
        double area = 0;
        double moment = 0;
        for (int i = first; i <= last; i++)
        {
            area += spectrum.Intensity[i];
            if (spectrum.Intensity[i] > 3 * noise)
            {
                moment += spectrum.Intensity[i] * i;
            }
        }

        double weight = 0;
        for (int i = first; i <= last; i++)
        {
            weight += spectrum.Intensity[i] > 3 * noise ? spectrum.Intensity[i] : 0;
        }

        double centroid = spectrum.Ppm(weight > 0 ? moment / weight : 0.5 * (first + last));
        double heights = maxima.Sum(m => m.Top.Height);
        double centre = maxima.Sum(m => m.Top.Height * m.Top.Hertz) / heights;
        double variance = maxima.Sum(m => m.Top.Height * Math.Pow(m.Top.Hertz - centre, 2)) / heights;
        return new MeasuredSignal(
            new Interval(spectrum.Ppm(last), spectrum.Ppm(first)),
            area * spectrum.HzPerPoint,
            centroid,
            Math.Sqrt(variance),
            [.. maxima.Select(m => m.Top)]);
    }
}
