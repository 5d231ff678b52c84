using static System.FormattableString;

namespace Qc.Engine.Reading.JcampDx;

/// <summary>Ordinates that a file may still hold.</summary>
internal sealed class ReadingBudget(int maxPoints)
{
    public int Left { get; private set; } = maxPoints;

    public bool TrySpend(int points, string label, int line, ReadingLog log)
    {
        if (points > Left)
        {
            return log.Fail(
                label, line, Invariant($"at most {log.Limits.MaxPoints} ordinates in a file"), "The file has too many ordinates");
        }

        Left -= points;
        return true;
    }
}
