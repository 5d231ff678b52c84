namespace Qc.Engine.Reading;

/// <summary>Recognises content that plainly is of some kind, for a better error; it never chooses a reader.</summary>
internal static class ContentKind
{
    private const string JcampDx = "JCAMP-DX";
    private const string NmrMl = "nmrML";
    private const string Csv = "CSV";

    public static string NameOf(SpectrumFormat format) => format switch
    {
        SpectrumFormat.JcampDx => JcampDx,
        SpectrumFormat.NmrMl => NmrMl,
        _ => Csv,
    };

    /// <summary>The kind, or null where it is not plain.</summary>
    public static string? Of(ReadOnlySpan<byte> content)
    {
        if (content.StartsWith("PK\u0003\u0004"u8))
        {
            return "a ZIP archive";
        }

        if (content.StartsWith((ReadOnlySpan<byte>)[0x1F, 0x8B]))
        {
            return "gzip-compressed";
        }

        if (content.StartsWith("%PDF-"u8))
        {
            return "a PDF document";
        }

        if (content.StartsWith((ReadOnlySpan<byte>)[0xFF, 0xFE]) || content.StartsWith((ReadOnlySpan<byte>)[0xFE, 0xFF]))
        {
            return "UTF-16 text";
        }

        var text = Utf8Mark.Skip(content).TrimStart(" \t\r\n"u8);
        if (text.IsEmpty)
        {
            return "empty";
        }

        if (text[0] == (byte)'<')
        {
            var opening = text[..Math.Min(text.Length, 4096)];
            return opening.IndexOf("<nmrML"u8) >= 0 || opening.IndexOf(":nmrML"u8) >= 0 ? NmrMl
                : text.StartsWith("<?xml"u8) || text.StartsWith("<!"u8) ? null
                : "XML or HTML, not nmrML";
        }

        if (text.StartsWith("##"u8))
        {
            return JcampDx;
        }

        if (content[..Math.Min(content.Length, 4096)].Contains((byte)0))
        {
            return "binary";
        }

        return text[0] is (>= (byte)'0' and <= (byte)'9') or (byte)'-' or (byte)'.' ? Csv : null;
    }
}
