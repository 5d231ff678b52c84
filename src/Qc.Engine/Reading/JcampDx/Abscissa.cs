using static System.FormattableString;

namespace Qc.Engine.Reading.JcampDx;

/// <summary>The axis of a table as its header states it, in <see cref="Units"/>.</summary>
/// <param name="First">Abscissa of the first ordinate.</param>
/// <param name="Last">Abscissa of the last ordinate.</param>
/// <param name="Delta">Stated step, else null.</param>
/// <param name="Factor">Factor from the printed X column to <paramref name="Units"/>.</param>
/// <param name="Points">Stated number of points.</param>
/// <param name="Units">Upper case, without blanks.</param>
/// <param name="Label">Label that states <paramref name="Points"/>, for messages.</param>
/// <param name="Line">Its line.</param>
internal sealed record Abscissa(
    double First, double Last, double? Delta, double Factor, int Points, string Units, string Label, int Line)
{
    private const double SameStep = 1e-9;
    private const double RoundingPoints = 0.1;
    private const double MostPointsOff = 1.2;

    /// <summary>The step for the number of ordinates found, if that number agrees with what the header says.</summary>
    /// <remarks>
    /// FIRSTX and LASTX fix the step; DELTAX is advisory (Davies and Lampen, Appl. Spectrosc. 1993, 47, 1093), and is used
    /// only where it is the same but for rounding. A count that is wrong by one (or, for an FID, counts both parts) is a
    /// departure where the axis itself confirms the ordinates found.
    /// </remarks>
    public bool TryGetStep(int found, ReadingLog log, out double step)
    {
        step = 0;
        if (found < 2)
        {
            return log.Fail(Label, Line, "at least 2 points", Invariant($"The table holds {found} ordinates"));
        }

        if (found != Points)
        {
            var confirmed = Delta is { } delta && Math.Abs(((Last - First) / delta) - (found - 1)) < 0.01;
            if (!confirmed || (Math.Abs(found - Points) > 1 && Points != 2 * found))
            {
                return log.Fail(
                    Label,
                    Line,
                    Invariant($"{Points} ordinates"),
                    Invariant($"The table holds {found} ordinates (a decimal comma would split each in two)"));
            }

            log.Warn(Label, Line, Invariant($"{Points} points are stated, but the table and its axis have {found}"));
        }

        step = (Last - First) / (found - 1);
        return step != 0
            ? CheckDelta(found, log, ref step)
            : log.Fail(Label, Line, "different first and last abscissae", "The axis has no extent");
    }

    private bool CheckDelta(int found, ReadingLog log, ref double step)
    {
        if (Delta is not { } delta)
        {
            return true;
        }

        if (Math.Abs(delta - step) <= SameStep * Math.Abs(step))
        {
            step = delta;
            return true;
        }

        var pointsOff = Math.Abs((Math.Abs(delta) - Math.Abs(step)) * (found - 1) / step);
        if (pointsOff > MostPointsOff)
        {
            return log.Fail(
                "DELTAX", 0, Invariant($"{step}, as first and last abscissa give"), Invariant($"The step is stated as {delta}"));
        }

        if (pointsOff > RoundingPoints || Math.Sign(delta) != Math.Sign(step))
        {
            log.Warn("DELTAX", 0, Invariant($"The stated step {delta} differs from {step}, which first and last abscissa give"));
        }

        return true;
    }
}
