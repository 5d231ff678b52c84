using System.Collections.Immutable;
using System.Numerics;

namespace Qc.Engine.Processing;

/// <summary>A stretch of a spectrum whose lines are fitted together for their phase.</summary>
/// <param name="First">First point.</param>
/// <param name="Last">Last point.</param>
/// <param name="Variance">What its phase is known to, roughly, in rad².</param>
/// <param name="Lines">Places and widths of its lines, in points.</param>
internal sealed record PhaseWindow(int First, int Last, double Variance, ImmutableArray<(double Place, double Width)> Lines)
{
    /// <summary>Most lines that are fitted together.</summary>
    public const int MostLines = 14;

    private const int MostPoints = 4096;
    private const double RoomInWidths = 8;
    private const double ProminenceInNoise = 5;
    private const double ProminenceOfTop = 0.02;

    /// <summary>How far its tails matter.</summary>
    private double Reach => Math.Max(Last - First, Lines.IsEmpty ? 1 : RoomInWidths * Lines.Max(l => l.Width));

    /// <summary>A stretch of a spectrum that is roughly in phase, with the lines that show in it.</summary>
    public static PhaseWindow Of(Complex[] phased, int first, int last, double variance, double noise) =>
        new(first, last, variance, LinesOf(phased, first, last, noise));

    /// <summary>
    /// Stretches closer than they are long lie on each other's tails: they are fitted together, the closest first, as
    /// long as there are not too many lines.
    /// </summary>
    public static List<PhaseWindow> Merge(IEnumerable<PhaseWindow> windows, int points)
    {
        List<PhaseWindow> merged = [.. windows.OrderBy(w => w.First)];
        while (true)
        {
            int closest = -1;
            double smallest = 1;
            for (int i = 1; i < merged.Count; i++)
            {
                PhaseWindow a = merged[i - 1];
                PhaseWindow b = merged[i];
                double ratio = (b.First - a.Last) / Math.Max(a.Reach, b.Reach);
                if (ratio < smallest && a.Lines.Length + b.Lines.Length <= MostLines && b.Last - a.First < MostPoints)
                {
                    (closest, smallest) = (i, ratio);
                }
            }

            if (closest < 0)
            {
                return Widened(merged, points);
            }

            PhaseWindow left = merged[closest - 1];
            PhaseWindow right = merged[closest];
            merged[closest - 1] = new PhaseWindow(
                left.First, right.Last, left.Variance * right.Variance / (left.Variance + right.Variance), [.. left.Lines, .. right.Lines]);
            merged.RemoveAt(closest);
        }
    }

    /// <summary>Room beside the outermost lines, where it is free: there dispersion shows, and what lies beneath.</summary>
    private static List<PhaseWindow> Widened(List<PhaseWindow> windows, int points)
    {
        var wide = new List<PhaseWindow>();
        for (int i = 0; i < windows.Count; i++)
        {
            PhaseWindow w = windows[i];
            if (w.Lines.IsEmpty)
            {
                continue;
            }

            double room = RoomInWidths * w.Lines.Max(l => l.Width);
            int lowest = i == 0 ? 0 : (windows[i - 1].Last + w.First) / 2;
            int highest = i == windows.Count - 1 ? points - 1 : (windows[i + 1].First + w.Last) / 2;
            int first = Math.Max(lowest, Math.Min(w.First, (int)(w.Lines[0].Place - room)));
            int last = Math.Min(highest, Math.Max(w.Last, (int)(w.Lines[^1].Place + room)));
            wide.Add(w with { First = Math.Max(0, first), Last = last });
        }

        return wide;
    }

    /// <summary>
    /// Maxima of the real part, the highest of them, with their widths at half height. A maximum counts where the curve rises to it
    /// and falls from it by more than noise does and by a share of the highest.
    /// </summary>
    private static ImmutableArray<(double Place, double Width)> LinesOf(Complex[] phased, int first, int last, double noise)
    {
        double highest = 0;
        for (int i = first; i <= last; i++)
        {
            highest = Math.Max(highest, phased[i].Real);
        }

        double needed = Math.Max(ProminenceInNoise * noise, ProminenceOfTop * highest);
        var tops = new List<int>();
        bool rising = true;
        int turn = first;
        for (int i = first; i <= last; i++)
        {
            double y = phased[i].Real;
            if (rising ? y > phased[turn].Real : y < phased[turn].Real)
            {
                turn = i;
            }
            else if (Math.Abs(y - phased[turn].Real) > needed)
            {
                if (rising)
                {
                    tops.Add(turn);
                }

                (rising, turn) = (!rising, i);
            }
        }

        return
        [
            .. tops.OrderByDescending(i => phased[i].Real).ThenBy(i => i).Take(MostLines).Order()
                .Select(i => ((double)i, (double)(HalfWay(phased, i, -1, first, last) + HalfWay(phased, i, 1, first, last)))),
        ];
    }

    private static int HalfWay(Complex[] phased, int top, int direction, int first, int last)
    {
        int i = top;
        while (i + direction >= first && i + direction <= last && phased[i].Real > 0.5 * phased[top].Real)
        {
            i += direction;
        }

        return Math.Abs(i - top);
    }
}
