namespace Qc.Engine.Values;

/// <summary>A closed interval on an axis; the unit is the axis's (ppm, Hz ...).</summary>
/// <param name="Low">Lower end.</param>
/// <param name="High">Upper end; never below <paramref name="Low"/>.</param>
public readonly record struct Interval(double Low, double High)
{
    /// <summary>High minus low.</summary>
    public double Width => High - Low;

    /// <summary>Middle of the interval.</summary>
    public double Centre => 0.5 * (Low + High);

    /// <summary>Whether <paramref name="x"/> lies in the interval, ends included.</summary>
    public bool Contains(double x) => x >= Low && x <= High;

    /// <summary>Whether the two intervals share a point.</summary>
    public bool Overlaps(Interval other) => Low <= other.High && other.Low <= High;
}
