using static System.FormattableString;

namespace Qc.Engine.Reading.JcampDx;

/// <summary>Tables of pairs, (XY..XY): x, y with blanks, commas or semicolons between.</summary>
internal static class XyPairs
{
    public static bool TryRead(
        ReadOnlySpan<byte> text, JcampRecord record, int maxPoints, ReadingLog log, out double[] x, out double[] y)
    {
        var pairs = new List<double>[] { [], [] };
        x = y = [];
        var line = record.Line + 1;
        var column = 0;
        for (var position = 0; position < text.Length;)
        {
            switch (AsdfDigits.KindOf(text[position]))
            {
                case AsdfKind.Delimiter:
                    position++;
                    break;
                case AsdfKind.Break:
                    position = TextLines.AfterBreak(text, position);
                    line++;
                    break;
                case AsdfKind.Number when AffnNumber.TryRead(text, ref position, ExponentRule.Always, out var value):
                    if (pairs[1].Count >= maxPoints)
                    {
                        return log.Fail(
                            record.Label, line, Invariant($"at most {maxPoints} pairs"), "The table has too many pairs");
                    }

                    pairs[column].Add(value);
                    column = 1 - column;
                    break;
                default:
                    if (text[position..].StartsWith("$$"u8))
                    {
                        position = TextLines.EndOfLine(text, position);
                        break;
                    }

                    return log.Fail(
                        record.Label, line, "pairs of finite numbers with decimal points", "A value of the table cannot be read");
            }
        }

        if (column != 0)
        {
            return log.Fail(record.Label, line, "an even count of numbers", "The last pair has no second number");
        }

        (x, y) = ([.. pairs[0]], [.. pairs[1]]);
        return true;
    }
}
