using static System.FormattableString;

namespace Qc.Engine.Reading;

/// <summary>Checks that abscissae given point by point are equidistant, as printed.</summary>
internal static class EquidistantAxis
{
    // One point left out of n moves some abscissa by at least (n - 1) / 2n, nearly half a step, from the line through the ends;
    // printed digits scatter them by less than this.
    private const double ToleranceSteps = 0.3;

    public static bool TryFit(
        ReadOnlySpan<double> x, string label, int line, ReadingLog log, out double first, out double step)
    {
        first = step = 0;
        if (x.Length < 2)
        {
            return log.Fail(label, line, "at least 2 points", Invariant($"There are {x.Length} points"));
        }

        first = x[0];
        step = (x[^1] - first) / (x.Length - 1);
        if (step == 0 || !double.IsFinite(step))
        {
            return log.Fail(label, line, "different first and last abscissae", "The axis has no extent");
        }

        for (var i = 0; i < x.Length; i++)
        {
            if (Math.Abs(x[i] - (first + (step * i))) >= ToleranceSteps * Math.Abs(step))
            {
                return log.Fail(
                    label,
                    line,
                    Invariant($"equidistant abscissae, about {first + (step * i)} here, printed with enough digits"),
                    Invariant($"Point {i + 1} lies at {x[i]}"));
            }
        }

        return true;
    }
}
