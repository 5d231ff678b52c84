using System.Security.Cryptography;

namespace Qc.Records;

/// <summary>
/// Identifiers of records: 26 characters of Crockford's base 32, 48 bits of milliseconds since 1970 and 80 random bits, so
/// that they sort by time and cannot be guessed.
/// </summary>
public static class Ids
{
    private const string Alphabet = "0123456789ABCDEFGHJKMNPQRSTVWXYZ";

    /// <summary>A new identifier.</summary>
    public static string New(DateTimeOffset at)
    {
        Span<byte> bytes = stackalloc byte[16];
        long milliseconds = at.ToUnixTimeMilliseconds();
        for (int i = 0; i < 6; i++)
        {
            bytes[i] = (byte)(milliseconds >> (8 * (5 - i)));
        }

        RandomNumberGenerator.Fill(bytes[6..]);
        var value = new UInt128(
            System.Buffers.Binary.BinaryPrimitives.ReadUInt64BigEndian(bytes),
            System.Buffers.Binary.BinaryPrimitives.ReadUInt64BigEndian(bytes[8..]));
        Span<char> text = stackalloc char[26];
        for (int i = 25; i >= 0; i--)
        {
            text[i] = Alphabet[(int)(value & 31)];
            value >>= 5;
        }

        return new string(text);
    }
}
