using System.Globalization;
using System.IO.Compression;
using System.Security.Cryptography;
using System.Text.RegularExpressions;
using Qc.Evidence;

namespace Qc.Verify;

/// <summary>The data attached to a certificate: one embedded file, whose SHA-256 the metadata name as "data sha256 {hex}".</summary>
internal static partial class Attachment
{
    private const int LargestBytes = 64 << 20;

    /// <summary>Whether the attached bytes have the hash that the file names.</summary>
    public static Verification Verify(byte[] file, string text)
    {
        Match head = EmbeddedFile().Match(text);
        if (!head.Success
            || !int.TryParse(head.Groups["length"].Value, NumberStyles.None, CultureInfo.InvariantCulture, out int length)
            || length > file.Length - (head.Index + head.Length))
        {
            return new Verification(false, "No attached data were found in the file.");
        }

        int start = head.Index + head.Length;
        if (EmbeddedFile().IsMatch(text, start + length))
        {
            return new Verification(false, "More than one file is attached.");
        }

        byte[]? data = Decode(file[start..(start + length)], head.Value);
        string around = string.Concat(text.AsSpan(0, start), text.AsSpan(start + length));
        string[] named = [.. Named().Matches(around).Select(m => m.Groups[1].Value).Distinct()];
        return data is not null && named is [var only] && only == Convert.ToHexStringLower(SHA256.HashData(data))
            ? new Verification(true, "The attached data are those named.")
            : new Verification(false, "The attached data do not have the SHA-256 that the certificate names.");
    }

    private static byte[]? Decode(byte[] stream, string dictionary)
    {
        if (!dictionary.Contains("/Filter", StringComparison.Ordinal))
        {
            return stream;
        }

        if (!SingleFlate().IsMatch(dictionary))
        {
            return null;
        }

        try
        {
            using var inflated = new ZLibStream(new MemoryStream(stream), CompressionMode.Decompress);
            byte[] buffer = new byte[LargestBytes];
            int read = inflated.ReadAtLeast(buffer, buffer.Length, throwOnEndOfStream: false);
            return read == buffer.Length ? null : buffer[..read];
        }
        catch (InvalidDataException)
        {
            return null;
        }
    }

    [GeneratedRegex(@"\d+ 0 obj\s*<<(?=[^\n]*/Type\s*/EmbeddedFile)[^\n]*/Length (?<length>\d{1,9})[^\n]*>>\s*stream\r?\n")]
    private static partial Regex EmbeddedFile();

    [GeneratedRegex(@"/Filter\s*/FlateDecode\b")]
    private static partial Regex SingleFlate();

    [GeneratedRegex(@"data sha256 ([0-9a-f]{64})")]
    private static partial Regex Named();
}
