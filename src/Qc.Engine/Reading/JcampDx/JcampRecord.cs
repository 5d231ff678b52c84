using static System.FormattableString;

namespace Qc.Engine.Reading.JcampDx;

/// <summary>One labelled record: "##LABEL= value", the value running to the next "##" at the start of a line.</summary>
/// <param name="Label">Normalised label: upper case, without blanks, '-', '/' and '_'; prefix '.' or '$' kept.</param>
/// <param name="Line">Line of the label, counted from 1.</param>
/// <param name="ValueStart">Offset of the first byte after '='.</param>
/// <param name="ValueEnd">Offset after the last byte of the value.</param>
internal readonly record struct JcampRecord(string Label, int Line, int ValueStart, int ValueEnd)
{
    /// <summary>Cuts a file into its records, in file order.</summary>
    /// <remarks>Label rule: McDonald and Wilks, Appl. Spectrosc. 1988, 42, 151.</remarks>
    public static bool TryScan(ReadOnlySpan<byte> content, ReadingLog log, out List<JcampRecord> records)
    {
        records = [];
        var position = content.Length - Utf8Mark.Skip(content).Length;
        var line = 1;
        while (position < content.Length)
        {
            var length = content[position..].IndexOfAny((byte)'\r', (byte)'\n');
            var end = length < 0 ? content.Length : position + length;
            if (end - position > log.Limits.MaxLineBytes)
            {
                return log.Fail("", line, Invariant($"at most {log.Limits.MaxLineBytes} bytes in a line"), "The line is too long");
            }

            if (StartsRecord(content, position, end, out var labelStart))
            {
                if (records.Count == log.Limits.MaxRecords)
                {
                    return log.Fail("", line, Invariant($"at most {log.Limits.MaxRecords} labels"), "The file has too many labels");
                }

                Close(records, position);
                var text = content[labelStart..end];
                var equals = text.IndexOf((byte)'=');
                var label = Normalise(equals < 0 ? text : text[..equals]);
                records.Add(new JcampRecord(label, line, equals < 0 ? end : labelStart + equals + 1, content.Length));
            }

            position = TextLines.AfterBreak(content, end);
            line++;
        }

        return true;
    }

    private static bool StartsRecord(ReadOnlySpan<byte> content, int start, int end, out int labelStart)
    {
        while (start < end && content[start] is (byte)' ' or (byte)'\t')
        {
            start++;
        }

        labelStart = start + 2;
        return start + 1 < end && content[start] == (byte)'#' && content[start + 1] == (byte)'#';
    }

    private static void Close(List<JcampRecord> records, int end)
    {
        if (records.Count > 0)
        {
            records[^1] = records[^1] with { ValueEnd = Math.Max(end, records[^1].ValueStart) };
        }
    }

    private static string Normalise(ReadOnlySpan<byte> label)
    {
        var comment = label.IndexOf("$$"u8);
        label = comment < 0 ? label : label[..comment];
        Span<char> kept = label.Length <= 256 ? stackalloc char[label.Length] : new char[label.Length];
        var count = 0;
        foreach (var c in label)
        {
            if (c is not ((byte)' ' or (byte)'\t' or (byte)'-' or (byte)'/' or (byte)'_'))
            {
                kept[count++] = c is >= (byte)'a' and <= (byte)'z' ? (char)(c - 32) : (char)c;
            }
        }

        return new string(kept[..count]);
    }
}
