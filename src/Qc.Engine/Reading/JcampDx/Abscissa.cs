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
        if (step == 0)
        {
            return log.Fail(Label, Line, "different first and last abscissae", "The axis has no extent");
        }

        step = Refine(step, found, log);
        return true;
    }

    /// <summary>Whether the stated step differs from the one of the axis by more than N against N - 1 points explains.</summary>
    public bool IsDisputedByDelta(double step, int found) => PointsOff(step, found) > MostPointsOff;

    // DELTAX says the same but for rounding: its printed digits are the better ones.
    private double Refine(double step, int found, ReadingLog log)
    {
        if (Delta is not { } delta)
        {
            return step;
        }

        if (Math.Abs(delta - step) <= SameStep * Math.Abs(step))
        {
            return delta;
        }

        if (PointsOff(step, found) > RoundingPoints || Math.Sign(delta) != Math.Sign(step))
        {
            log.Warn("DELTAX", 0, Invariant($"The stated step {delta} differs from {step}, which first and last abscissa give"));
        }

        return step;
    }

    private double PointsOff(double step, int found) =>
        Delta is { } delta ? Math.Abs((Math.Abs(delta) - Math.Abs(step)) * (found - 1) / step) : 0;
}
