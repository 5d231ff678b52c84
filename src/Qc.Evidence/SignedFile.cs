using System.Security.Cryptography;
using System.Text.Json;

namespace Qc.Evidence;

/// <summary>What the files of evidence have in common: canonical JSON, a format, an exact set of members, signed heads.</summary>
internal static class SignedFile
{
    /// <summary>Reads a file that must be canonical JSON of one object with exactly these members (in order of their names).</summary>
    public static bool TryRead(ReadOnlyMemory<byte> file, string format, string[] members, out JsonElement root, out string why)
    {
        root = default;
        why = "The file is not canonical JSON (RFC 8785): it was changed after it was written.";
        try
        {
            using JsonDocument document = JsonDocument.Parse(file);
            root = document.RootElement.Clone();
            if (!CanonicalJson.Of(root).AsSpan().SequenceEqual(file.Span))
            {
                return false;
            }
        }
        catch (Exception e) when (e is JsonException or NotSupportedException or InvalidOperationException)
        {
            // The parser says by exceptions that text is not JSON, a name occurs twice, or a string is not Unicode.
            return false;
        }

        why = $"The file is not of the format \"{format}\".";
        return root.ValueKind == JsonValueKind.Object
            && root.EnumerateObject().Select(m => m.Name).SequenceEqual(members)
            && root.GetProperty("format") is { ValueKind: JsonValueKind.String } name && name.GetString() == format;
    }

    /// <summary>Reads a signed head and checks its signature.</summary>
    public static bool TryHead(
        JsonElement root, string textMember, string signatureMember, ECDsa publicKey, out TreeHead? head, out string why)
    {
        head = null;
        why = "The signed head is not in the format of a tree head.";
        if (root.GetProperty(textMember) is not { ValueKind: JsonValueKind.String } text
            || root.GetProperty(signatureMember) is not { ValueKind: JsonValueKind.String } signature
            || (head = TreeHead.Parse(text.GetString()!)) is null)
        {
            return false;
        }

        why = "The signature of the head is not by this key, or the head was changed.";
        return TreeHead.Verify(text.GetString()!, signature.GetString()!, publicKey);
    }

    /// <summary>Reads a list of hashes in hex.</summary>
    public static bool TryHashes(JsonElement list, out byte[][] hashes)
    {
        hashes = [];
        if (list.ValueKind != JsonValueKind.Array
            || list.EnumerateArray().Any(h => h.ValueKind != JsonValueKind.String || !IsHash(h.GetString()!)))
        {
            return false;
        }

        hashes = [.. list.EnumerateArray().Select(h => Convert.FromHexString(h.GetString()!))];
        return true;
    }

    private static bool IsHash(string hex) =>
        hex.Length == 2 * MerkleTree.HashLength && hex.All(c => c is (>= '0' and <= '9') or (>= 'a' and <= 'f'));
}
