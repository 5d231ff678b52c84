using System.Collections.Immutable;

namespace Qc.Engine.Processing;

/// <summary>
/// Single lines that stand alone: no other maximum within 12 Hz reaches a quarter of the height (wiggles of a truncated FID
/// reach 21.7 %, 29Si satellites 2.4 %), so no line of a multiplet is one.
/// </summary>
internal sealed class LoneLines
{
    private const double NeighbourhoodHertz = 12;
    private const double LargestNeighbour = 0.25;
    private const double SmallestHeightInNoise = 15;
    private const double SmallestProminence = 0.5;

    private readonly double frequencyMHz;

    public LoneLines(IReadOnlyList<Maximum> maxima, Spectrum spectrum)
    {
        frequencyMHz = spectrum.FrequencyMHz;
        All =
        [
            .. maxima.Where(m => m.Height > SmallestHeightInNoise * spectrum.NoiseStandardDeviation
                && m.Prominence > SmallestProminence * m.Height
                && !maxima.Any(o => o != m && Math.Abs(o.Hertz - m.Hertz) < NeighbourhoodHertz && o.Height > LargestNeighbour * m.Height)),
        ];
    }

    /// <summary>All lone lines, from high to low ppm.</summary>
    public ImmutableArray<Maximum> All { get; }

    /// <summary>Shift of a line.</summary>
    public double Ppm(Maximum line) => line.Hertz / frequencyMHz;

    /// <summary>Lone lines within reach of a shift, not wider than stated, the nearest first.</summary>
    public ImmutableArray<Maximum> Near(double ppm, double reachPpm, double widestHertz) =>
        [.. All.Where(m => Math.Abs(Ppm(m) - ppm) <= reachPpm && m.WidthHertz <= widestHertz).OrderBy(m => Math.Abs(Ppm(m) - ppm))];
}
