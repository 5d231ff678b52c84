namespace Qc.Engine.Reading;

/// <summary>Lines that end in LF, CR or CRLF.</summary>
internal static class TextLines
{
    /// <summary>Offset of the line after the break at <paramref name="end"/>.</summary>
    public static int AfterBreak(ReadOnlySpan<byte> content, int end)
    {
        if (end >= content.Length)
        {
            return content.Length;
        }

        return content[end] == (byte)'\r' && end + 1 < content.Length && content[end + 1] == (byte)'\n' ? end + 2 : end + 1;
    }

    /// <summary>Offset of the line break that ends the line holding <paramref name="start"/>, or of the end.</summary>
    public static int EndOfLine(ReadOnlySpan<byte> content, int start)
    {
        var length = content[start..].IndexOfAny((byte)'\r', (byte)'\n');
        return length < 0 ? content.Length : start + length;
    }
}
