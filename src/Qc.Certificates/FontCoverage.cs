using System.Buffers.Binary;
using System.Globalization;
using System.Text;

namespace Qc.Certificates;

/// <summary>
/// The characters that a TrueType font has, from its table 'cmap', formats 4 and 12 (OpenType specification, from memory).
/// What it has not is printed as its code point, "[U+5317]": visible, and no character is lost.
/// </summary>
internal sealed class FontCoverage
{
    private readonly HashSet<int> covered = [];

    private FontCoverage()
    {
    }

    /// <summary>Reads the coverage of a font.</summary>
    public static FontCoverage Of(ReadOnlySpan<byte> font)
    {
        var coverage = new FontCoverage();
        int tables = U16(font, 4);
        for (int t = 0; t < tables; t++)
        {
            ReadOnlySpan<byte> record = font[(12 + (16 * t))..];
            if (record[..4].SequenceEqual("cmap"u8))
            {
                coverage.ReadMap(font.Slice((int)U32(record, 8), (int)U32(record, 12)));
            }
        }

        return coverage;
    }

    /// <summary>The text with what the font cannot show, and what would not be seen, written as code points.</summary>
    public string Visible(string text)
    {
        var visible = new StringBuilder(text.Length);
        foreach (Rune rune in text.Normalize(NormalizationForm.FormC).EnumerateRunes())
        {
            bool blank = Rune.IsWhiteSpace(rune);
            bool hidden = Rune.GetUnicodeCategory(rune)
                is UnicodeCategory.Control or UnicodeCategory.Format or UnicodeCategory.PrivateUse or UnicodeCategory.OtherNotAssigned;
            if (blank)
            {
                visible.Append(' ');
            }
            else if (!hidden && covered.Contains(rune.Value))
            {
                visible.Append(rune.ToString());
            }
            else
            {
                visible.Append(CultureInfo.InvariantCulture, $"[U+{rune.Value:X4}]");
            }
        }

        return visible.ToString();
    }

    private void ReadMap(ReadOnlySpan<byte> map)
    {
        for (int i = 0; i < U16(map, 2); i++)
        {
            ReadOnlySpan<byte> sub = map[(int)U32(map, 4 + (8 * i) + 4)..];
            switch (U16(sub, 0))
            {
                case 4:
                    ReadSegments(sub);
                    break;
                case 12:
                    for (int g = 0; g < U32(sub, 12); g++)
                    {
                        AddRange((int)U32(sub, 16 + (12 * g)), (int)U32(sub, 20 + (12 * g)));
                    }

                    break;
            }
        }
    }

    private void ReadSegments(ReadOnlySpan<byte> sub)
    {
        int doubled = U16(sub, 6);
        for (int s = 0; s < doubled; s += 2)
        {
            int last = U16(sub, 14 + s);
            int first = U16(sub, 16 + doubled + s);
            int delta = U16(sub, 16 + (2 * doubled) + s);
            int place = 16 + (3 * doubled) + s;
            int offset = U16(sub, place);
            for (int c = first; c <= last && c < 0xFFFF; c++)
            {
                int glyph = offset == 0 ? c + delta : U16(sub, place + offset + (2 * (c - first)));
                if ((glyph & 0xFFFF) != 0)
                {
                    covered.Add(c);
                }
            }
        }
    }

    private void AddRange(int first, int last)
    {
        for (int c = first; c <= last; c++)
        {
            covered.Add(c);
        }
    }

    private static int U16(ReadOnlySpan<byte> bytes, int at) => BinaryPrimitives.ReadUInt16BigEndian(bytes[at..]);

    private static uint U32(ReadOnlySpan<byte> bytes, int at) => BinaryPrimitives.ReadUInt32BigEndian(bytes[at..]);
}
