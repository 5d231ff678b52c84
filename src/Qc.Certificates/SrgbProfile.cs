using System.Buffers.Binary;
using System.Text;

namespace Qc.Certificates;

/// <summary>
/// A colour profile of sRGB, version 2 of the ICC format (ICC.1:2001-04, from memory): three primaries adapted to D50 and a
/// tone curve computed from IEC 61966-2-1. PDF/A asks for one wherever device colours are used.
/// </summary>
internal static class SrgbProfile
{
    /// <summary>The profile.</summary>
    public static byte[] Bytes { get; } = Make();

    private static byte[] Make()
    {
        byte[] curve = Curve();
        (string Name, byte[] Data)[] tags =
        [
            ("desc", Description("sRGB IEC61966-2.1")),
            ("cprt", [.. "text\0\0\0\0No copyright claimed\0"u8]),
            ("wtpt", Xyz(0.9642, 1.0, 0.8249)),
            ("rXYZ", Xyz(0.43607, 0.22249, 0.01392)),
            ("gXYZ", Xyz(0.38515, 0.71687, 0.09708)),
            ("bXYZ", Xyz(0.14307, 0.06061, 0.71410)),
            ("rTRC", curve),
            ("gTRC", curve),
            ("bTRC", curve),
        ];
        int offset = 128 + 4 + (12 * tags.Length);
        using var table = new MemoryStream();
        using var data = new MemoryStream();
        table.Write(U32((uint)tags.Length));
        foreach ((string name, byte[] content) in tags)
        {
            table.Write(Encoding.ASCII.GetBytes(name));
            table.Write(U32((uint)(offset + data.Length)));
            table.Write(U32((uint)content.Length));
            data.Write(content);
            data.Write(new byte[(4 - (content.Length % 4)) % 4]);
        }

        byte[] header = new byte[128];
        U32((uint)(offset + data.Length)).CopyTo(header, 0);
        U32(0x02100000).CopyTo(header, 8);
        "mntrRGB XYZ "u8.CopyTo(header.AsSpan(12));
        byte[] made = [7, 0xEA, 0, 1, 0, 1, 0, 0, 0, 0, 0, 0]; // 2026-01-01: the format asks for a date.
        made.CopyTo(header, 24);
        "acsp"u8.CopyTo(header.AsSpan(36));
        Xyz(0.9642, 1.0, 0.8249).AsSpan(8).CopyTo(header.AsSpan(68));
        return [.. header, .. table.ToArray(), .. data.ToArray()];
    }

    private static byte[] Curve()
    {
        const int Points = 256;
        byte[] curve = new byte[12 + (2 * Points)];
        "curv"u8.CopyTo(curve);
        U32(Points).CopyTo(curve, 8);
        for (int i = 0; i < Points; i++)
        {
            double v = i / (Points - 1.0);
            double linear = v <= 0.04045 ? v / 12.92 : Math.Pow((v + 0.055) / 1.055, 2.4);
            BinaryPrimitives.WriteUInt16BigEndian(curve.AsSpan(12 + (2 * i)), (ushort)Math.Round(linear * 65535));
        }

        return curve;
    }

    private static byte[] Description(string text) =>
        [.. "desc\0\0\0\0"u8, .. U32((uint)text.Length + 1), .. Encoding.ASCII.GetBytes(text), .. new byte[1 + 4 + 4 + 2 + 1 + 67]];

    private static byte[] Xyz(double x, double y, double z) => [.. "XYZ \0\0\0\0"u8, .. Fixed(x), .. Fixed(y), .. Fixed(z)];

    private static byte[] Fixed(double value) => U32((uint)Math.Round(value * 65536));

    private static byte[] U32(uint value)
    {
        byte[] bytes = new byte[4];
        BinaryPrimitives.WriteUInt32BigEndian(bytes, value);
        return bytes;
    }
}
