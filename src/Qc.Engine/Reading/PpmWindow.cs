using static System.FormattableString;

namespace Qc.Engine.Reading;

/// <summary>
/// Plausibility of a ppm axis, wide enough for any real window and far from Hz read as ppm or the reverse: Hz of a proton
/// spectrum span hundreds to thousands, ppm read as Hz span hundredths of a ppm.
/// </summary>
internal static class PpmWindow
{
    private const double WidestProton = 200;
    private const double Widest = 5000;
    private const double Narrowest = 0.2;

    public static bool Check(
        double first, double step, int points, string nucleus, string label, int line, ReadingLog log)
    {
        var extent = Math.Abs(step) * (points - 1);
        var widest = nucleus == "1H" ? WidestProton : Widest;
        return (extent >= Narrowest && extent <= widest && Math.Abs(first) <= widest) || log.Fail(
            label,
            line,
            Invariant($"an axis of {Narrowest} to {widest} ppm; Hz and ppm may have been confused"),
            Invariant($"The axis begins at {first} ppm and spans {extent} ppm"));
    }
}
