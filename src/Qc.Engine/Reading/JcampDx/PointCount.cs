using static System.FormattableString;

namespace Qc.Engine.Reading.JcampDx;

/// <summary>A stated number of points; real files print it as a decimal ("16384.000000000").</summary>
internal static class PointCount
{
    public static bool TryGet(double stated, string label, int line, ReadingLog log, out int count)
    {
        count = 0;
        if (stated != Math.Floor(stated) || stated < 2)
        {
            return log.Fail(label, line, "a whole number, at least 2", Invariant($"The number of points is {stated}"));
        }

        if (stated > log.Limits.MaxPoints)
        {
            return log.Fail(
                label, line, Invariant($"at most {log.Limits.MaxPoints}"), Invariant($"The number of points is {stated}"));
        }

        count = (int)stated;
        return true;
    }
}
