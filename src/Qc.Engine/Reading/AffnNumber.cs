using System.Globalization;

namespace Qc.Engine.Reading;

/// <summary>When an 'E' behind digits is an exponent and not the pseudo-digit of the packed forms.</summary>
internal enum ExponentRule
{
    /// <summary>Always: the text has no packed forms.</summary>
    Always,

    /// <summary>With a sign, or after a decimal point: ordinates that may be packed.</summary>
    SignOrPoint,

    /// <summary>With a sign: the X that opens a line, behind which packed ordinates may follow at once.</summary>
    Sign,
}

/// <summary>Numbers in text, whatever the culture: sign, digits, point, exponent; finite, never with a decimal comma.</summary>
internal static class AffnNumber
{
    private const NumberStyles Style =
        NumberStyles.AllowLeadingSign | NumberStyles.AllowDecimalPoint | NumberStyles.AllowExponent;

    /// <summary>A number that is all of <paramref name="text"/> but blanks, stray quotes and a closing semicolon.</summary>
    public static bool TryParse(ReadOnlySpan<char> text, out double value) =>
        double.TryParse(text.Trim("; \t\r\n\"'<>"), Style, CultureInfo.InvariantCulture, out value)
        && double.IsFinite(value);

    /// <summary>The number that starts at <paramref name="position"/>, which is moved behind it.</summary>
    /// <param name="text">Bytes of a table.</param>
    /// <param name="position">Where the number starts.</param>
    /// <param name="rule">When an 'E' is an exponent.</param>
    /// <param name="value">The number.</param>
    public static bool TryRead(ReadOnlySpan<byte> text, ref int position, ExponentRule rule, out double value)
    {
        var end = position;
        if (end < text.Length && text[end] is (byte)'+' or (byte)'-')
        {
            end++;
        }

        var whole = 0L;
        var digitsStart = end;
        for (; end < text.Length && IsDigit(text[end]); end++)
        {
            whole = unchecked((whole * 10) + (text[end] - '0'));
        }

        var digits = end - digitsStart;
        var hasPoint = end < text.Length && text[end] == (byte)'.';
        if (hasPoint)
        {
            for (end++; end < text.Length && IsDigit(text[end]); end++)
            {
                digits++;
            }
        }

        var exponentEnd = ExponentEnd(text, end, rule == ExponentRule.Always || (hasPoint && rule == ExponentRule.SignOrPoint));
        var start = position;
        if (!hasPoint && exponentEnd == end && digits is > 0 and <= 15)
        {
            position = end;
            value = text[start] == (byte)'-' ? -whole : whole;
            return true;
        }

        position = exponentEnd;
        value = 0;
        return digits > 0
            && double.TryParse(text[start..exponentEnd], Style, CultureInfo.InvariantCulture, out value)
            && double.IsFinite(value);
    }

    private static int ExponentEnd(ReadOnlySpan<byte> text, int end, bool signMayMiss)
    {
        var next = end;
        if (next >= text.Length || text[next] is not ((byte)'E' or (byte)'e'))
        {
            return end;
        }

        next++;
        var signed = next < text.Length && text[next] is (byte)'+' or (byte)'-';
        next += signed ? 1 : 0;
        var first = next;
        while (next < text.Length && IsDigit(text[next]))
        {
            next++;
        }

        return (signed || signMayMiss) && next > first && next - first <= 4 ? next : end;
    }

    private static bool IsDigit(byte c) => (uint)(c - '0') <= 9;
}
