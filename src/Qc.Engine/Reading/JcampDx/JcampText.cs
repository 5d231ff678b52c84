using System.Text;

namespace Qc.Engine.Reading.JcampDx;

/// <summary>Turns the bytes of a value into text.</summary>
internal static class JcampText
{
    /// <summary>UTF-8 where the whole file is valid UTF-8 (ASCII is), else Latin-1, in which every byte has a meaning.</summary>
    public static Encoding EncodingOf(ReadOnlySpan<byte> content) =>
        System.Text.Unicode.Utf8.IsValid(content) ? Encoding.UTF8 : Encoding.Latin1;

    /// <summary>The first line of a value as a keyword: no comment, no blanks, upper case.</summary>
    public static string Keyword(ReadOnlySpan<byte> content, JcampRecord record)
    {
        var value = content[record.ValueStart..record.ValueEnd];
        value = WithoutComment(value[..TextLines.EndOfLine(value, 0)]);
        var text = new StringBuilder(value.Length);
        foreach (var c in value)
        {
            if (c > 32)
            {
                text.Append(c is >= (byte)'a' and <= (byte)'z' ? (char)(c - 32) : (char)c);
            }
        }

        return text.ToString();
    }

    /// <summary>The whole value without comments and outer blanks, lines joined by LF.</summary>
    public static string Value(ReadOnlySpan<byte> content, JcampRecord record, Encoding encoding)
    {
        var value = content[record.ValueStart..record.ValueEnd];
        var text = new StringBuilder();
        for (var start = 0; start < value.Length;)
        {
            var end = TextLines.EndOfLine(value, start);
            text.Append(encoding.GetString(WithoutComment(value[start..end])).TrimEnd()).Append('\n');
            start = TextLines.AfterBreak(value, end);
        }

        return text.ToString().Trim();
    }

    private static ReadOnlySpan<byte> WithoutComment(ReadOnlySpan<byte> line)
    {
        var comment = line.IndexOf("$$"u8);
        return comment < 0 ? line : line[..comment];
    }
}
