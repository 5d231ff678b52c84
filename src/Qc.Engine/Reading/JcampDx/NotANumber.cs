using System.Text;

namespace Qc.Engine.Reading.JcampDx;

/// <summary>
/// Words for what is not a finite number. As their letters are pseudo-digits too, they are words only where they stand alone
/// between blanks; packed tables have none.
/// </summary>
internal static class NotANumber
{
    private static readonly string[] s_words = ["NAN", "INF", "INFINITY", "?"];

    public static bool StartsAt(ReadOnlySpan<byte> text)
    {
        if (!text.IsEmpty && text[0] is (byte)'+' or (byte)'-')
        {
            text = text[1..];
        }

        foreach (var word in s_words)
        {
            if (text.Length >= word.Length
                && Ascii.EqualsIgnoreCase(text[..word.Length], word)
                && (text.Length == word.Length
                    || AsdfDigits.KindOf(text[word.Length]) is AsdfKind.Delimiter or AsdfKind.Break))
            {
                return true;
            }
        }

        return false;
    }
}
