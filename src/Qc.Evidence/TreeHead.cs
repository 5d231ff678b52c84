using System.Globalization;
using System.Security.Cryptography;
using System.Text;

namespace Qc.Evidence;

/// <summary>
/// The state of the audit log at one time, as it is signed and published on certificates. Its text form, one line each,
/// ended by a line feed:
/// <code>
/// qc audit log
/// {origin}
/// {size}
/// {root, base64}
/// {time, ISO 8601 UTC}
/// </code>
/// The signature is ECDSA on P-256 with SHA-256 over the UTF-8 bytes of that text (IEEE P1363 form, base64). Whoever holds
/// an old head and a consistency proof to a newer one knows that nothing was changed or removed in between.
/// Example: origin "qc.example", size 1, root of the single leaf "": third line "1", fourth "bjQLnP+zepicpUTmu3gKLHiQHT+zNzh2hRGjBhevoB0=".
/// </summary>
/// <param name="Origin">Name of the site that keeps the log; one line.</param>
/// <param name="Size">Number of entries.</param>
/// <param name="Root">Root hash over them.</param>
/// <param name="At">When it was taken, UTC.</param>
public sealed record TreeHead(string Origin, long Size, byte[] Root, DateTimeOffset At)
{
    private const string Title = "qc audit log";

    /// <summary>The text that is signed.</summary>
    public string Text => string.Create(
        CultureInfo.InvariantCulture,
        $"{Title}\n{Origin}\n{Size}\n{Convert.ToBase64String(Root)}\n{At.UtcDateTime:yyyy-MM-ddTHH:mm:ss.ffffffZ}\n");

    /// <summary>Signs the text; base64.</summary>
    public string Sign(ECDsa key) => Convert.ToBase64String(key.SignData(Encoding.UTF8.GetBytes(Text), HashAlgorithmName.SHA256));

    /// <summary>Whether a signature is that of the key's holder over this text.</summary>
    public static bool Verify(string text, string signature, ECDsa publicKey)
    {
        Span<byte> bytes = stackalloc byte[128];
        return Convert.TryFromBase64String(signature, bytes, out int length)
            && Convert.ToBase64String(bytes[..length]) == signature // One spelling only: spare bits of base64 hide nothing.
            && publicKey.VerifyData(Encoding.UTF8.GetBytes(text), bytes[..length], HashAlgorithmName.SHA256);
    }

    /// <summary>Reads the text form; null where it is not one.</summary>
    public static TreeHead? Parse(string text)
    {
        string[] lines = text.Split('\n');
        return lines.Length == 6 && lines[0] == Title && lines[5].Length == 0
            && long.TryParse(lines[2], NumberStyles.None, CultureInfo.InvariantCulture, out long size)
            && TryRoot(lines[3], out byte[] root)
            && DateTimeOffset.TryParseExact(
                lines[4], "yyyy-MM-ddTHH:mm:ss.ffffffZ", CultureInfo.InvariantCulture, DateTimeStyles.AssumeUniversal, out DateTimeOffset at)
            ? new TreeHead(lines[1], size, root, at)
            : null;
    }

    private static bool TryRoot(string base64, out byte[] root)
    {
        root = new byte[MerkleTree.HashLength];
        return Convert.TryFromBase64String(base64, root, out int length) && length == MerkleTree.HashLength;
    }
}
