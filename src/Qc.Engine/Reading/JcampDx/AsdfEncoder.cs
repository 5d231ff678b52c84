using System.Globalization;
using System.Text;

namespace Qc.Engine.Reading.JcampDx;

/// <summary>Writes ordinates as lines of a table, at most 80 characters each; the forms are those of <see cref="AsdfDecoder"/>.</summary>
internal static class AsdfEncoder
{
    private const int LineLength = 80;

    /// <summary>DIF and DUP: every line but the first opens with the check ordinate, a last line holds it alone.</summary>
    /// <param name="text">Takes the lines.</param>
    /// <param name="values">Integers whose differences have at most 15 digits.</param>
    /// <param name="abscissa">X as printed, by index.</param>
    public static void WriteDifDup(StringBuilder text, long[] values, Func<int, string> abscissa)
    {
        var lineStart = text.Length;
        text.Append(abscissa(0)).Append(' ');
        Append(text, values[0], AsdfDigits.Squeezed, AsdfDigits.SqueezedNegative);
        for (var i = 1; i < values.Length;)
        {
            var difference = values[i] - values[i - 1];
            var run = 1;
            while (i + run < values.Length && values[i + run] - values[i + run - 1] == difference)
            {
                run++;
            }

            var tokenStart = text.Length;
            Append(text, difference, AsdfDigits.Difference, AsdfDigits.DifferenceNegative);
            if (run > 1)
            {
                Append(text, run, AsdfDigits.Repeat, AsdfDigits.Repeat);
            }

            if (text.Length - lineStart > LineLength)
            {
                var token = text.ToString(tokenStart, text.Length - tokenStart);
                text.Length = tokenStart;
                lineStart = Break(text, values[i - 1], abscissa(i - 1));
                text.Append(token);
            }

            i += run;
        }

        Break(text, values[^1], abscissa(values.Length - 1));
        text.Append('\n');
    }

    /// <summary>AFFN: numbers with blanks between.</summary>
    public static void WriteAffn(StringBuilder text, int count, Func<int, string> ordinate, Func<int, string> abscissa)
    {
        var lineStart = text.Length;
        for (var i = 0; i < count; i++)
        {
            var number = ordinate(i);
            if (i > 0 && text.Length - lineStart + number.Length >= LineLength)
            {
                text.Append('\n');
                lineStart = text.Length;
            }

            if (text.Length == lineStart)
            {
                text.Append(abscissa(i));
            }

            text.Append(' ').Append(number);
        }

        text.Append('\n');
    }

    private static int Break(StringBuilder text, long check, string abscissa)
    {
        text.Append('\n');
        var lineStart = text.Length;
        text.Append(abscissa).Append(' ');
        Append(text, check, AsdfDigits.Squeezed, AsdfDigits.SqueezedNegative);
        return lineStart;
    }

    private static void Append(StringBuilder text, long value, string positive, string negative)
    {
        var start = text.Length;
        text.Append(CultureInfo.InvariantCulture, $"{Math.Abs(value)}");
        text[start] = (value < 0 ? negative : positive)[text[start] - '0'];
    }
}
