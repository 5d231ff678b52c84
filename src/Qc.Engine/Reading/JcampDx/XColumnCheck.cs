using static System.FormattableString;

namespace Qc.Engine.Reading.JcampDx;

/// <summary>
/// The x-check: the X printed on each line is a checksum of the axis, never the axis itself. Instruments print it in real
/// units, in points, or counted from another origin; each is recognised and recorded.
/// </summary>
internal static class XColumnCheck
{
    // Half a step would be exact; printed X are rounded to whole points by some writers, hence a little more.
    private const double ToleranceSteps = 0.6;

    /// <summary>False, with an error, only where the axis is in doubt and nothing tells what is right.</summary>
    public static bool Run(List<LineMark> marks, Abscissa axis, double step, int found, string label, ReadingLog log)
    {
        var scale = axis.Factor / step;
        var origin = marks[0].X;
        var failed = FirstFailure(marks, scale, axis.First / step);
        if ((failed is not null || marks.Count == 1) && axis.IsDisputedByDelta(step, found))
        {
            return log.Fail(
                "DELTAX",
                0,
                Invariant($"{step}, as first and last abscissa give"),
                Invariant($"The step is stated as {axis.Delta}, and the X column does not tell which is right"));
        }

        if (failed is not { } failure)
        {
            return true;
        }

        if (FirstFailure(marks, scale, origin * scale) is null)
        {
            log.Warn(
                label,
                marks[0].Line,
                Invariant($"The X column begins at {origin * axis.Factor} but the axis at {axis.First}; the axis is used"));
            return true;
        }

        var mirrored = FirstFailure(marks, -scale, -origin * scale) is null;
        var bothEnds = Math.Abs((origin * axis.Factor) - axis.Last) <= Math.Abs(step);
        var deltaAgrees = axis.Delta is { } delta && Math.Sign(delta) == Math.Sign(step);
        if (mirrored && bothEnds && !deltaAgrees)
        {
            return log.Fail(
                label,
                marks[0].Line,
                Invariant($"lines that run from {axis.First} to {axis.Last}"),
                "The X column runs the other way, so that the direction of the axis is in doubt");
        }

        if (FirstFailure(marks, 1, origin) is null || FirstFailure(marks, -1, -origin) is null)
        {
            log.Warn(label, marks[0].Line, "The X column counts points instead of giving abscissae; the axis is used");
            return true;
        }

        var mark = marks[failure];
        log.Warn(
            label,
            mark.Line,
            Invariant($"The x-check fails: X is {mark.X * axis.Factor}, where the axis has {axis.First + (mark.Index * step)}"));
        return true;
    }

    private static int? FirstFailure(List<LineMark> marks, double scale, double origin)
    {
        for (var i = 0; i < marks.Count; i++)
        {
            if (!(Math.Abs((marks[i].X * scale) - origin - marks[i].Index) <= ToleranceSteps))
            {
                return i;
            }
        }

        return null;
    }
}
