using System.Globalization;
using System.Security.Cryptography;
using System.Text;
using System.Text.Json;
using System.Text.Json.Nodes;

namespace Qc.Evidence;

/// <summary>Whether something verifies, and a plain sentence that says what was found.</summary>
/// <param name="IsValid">True where it verifies.</param>
/// <param name="Message">What was found.</param>
public sealed record Verification(bool IsValid, string Message);

/// <summary>
/// An audit log in one file, checkable without the service. The file is the canonical JSON (RFC 8785) of
/// <code>{"entries":[{entry}, ...],"format":"qc audit export 1","head":"{text}","leaves":["{hex}", ...],"signature":"{base64}"}</code>
/// with all entries from index 0 (<see cref="AuditEntry"/>), the signed head over exactly these (<see cref="TreeHead"/>) and
/// the hash of each leaf. The leaf hashes are redundant: they let a verifier say which entry was changed. A file that is not
/// byte for byte canonical is refused, so no byte of it can be changed unnoticed.
/// </summary>
public static class AuditExport
{
    private const string Format = "qc audit export 1";

    /// <summary>Makes an export.</summary>
    /// <param name="canonicalEntries">Canonical JSON of each entry, from index 0.</param>
    /// <param name="head">Signed text of the head over them.</param>
    /// <param name="signature">Its signature, base64.</param>
    public static byte[] Write(IEnumerable<string> canonicalEntries, string head, string signature)
    {
        var entries = new JsonArray();
        var leaves = new JsonArray();
        foreach (string entry in canonicalEntries)
        {
            entries.Add(JsonNode.Parse(entry));
            leaves.Add(Convert.ToHexStringLower(MerkleTree.LeafHash(Encoding.UTF8.GetBytes(entry))));
        }

        var export = new JsonObject
        {
            ["format"] = Format,
            ["entries"] = entries,
            ["leaves"] = leaves,
            ["head"] = head,
            ["signature"] = signature,
        };
        return CanonicalJson.Of(JsonSerializer.SerializeToElement(export));
    }

    /// <summary>
    /// Checks an export, and that it begins with exactly the entries of a head that was signed earlier and kept elsewhere: on a
    /// certificate, by an auditor. A log that was rewritten and signed anew passes the first and fails the second.
    /// </summary>
    public static Verification VerifyAgainst(ReadOnlyMemory<byte> file, string earlierHead, string earlierSignature, ECDsa publicKey)
    {
        Verification whole = Verify(file, publicKey);
        if (!whole.IsValid)
        {
            return whole;
        }

        if (TreeHead.Parse(earlierHead) is not { } earlier || !TreeHead.Verify(earlierHead, earlierSignature, publicKey))
        {
            return new Verification(false, "The earlier head is not signed by this key.");
        }

        using JsonDocument export = JsonDocument.Parse(file);
        JsonElement entries = export.RootElement.GetProperty("entries");
        if (entries.GetArrayLength() < earlier.Size)
        {
            return new Verification(false, $"{earlier.Size} entries were signed at {earlier.At:u}; the export has {entries.GetArrayLength()}: entries were removed.");
        }

        var frontier = new MerkleFrontier();
        foreach (JsonElement entry in entries.EnumerateArray().Take((int)earlier.Size))
        {
            frontier.Append(MerkleTree.LeafHash(CanonicalJson.Of(entry)));
        }

        return frontier.Root().AsSpan().SequenceEqual(earlier.Root)
            ? new Verification(true, whole.Message + string.Create(CultureInfo.InvariantCulture, $" They begin with the {earlier.Size} signed at {earlier.At:yyyy-MM-dd HH:mm:ss} UTC."))
            : new Verification(false, $"The first {earlier.Size} entries are not those signed at {earlier.At:u}: the log was rewritten.");
    }

    /// <summary>Checks an export against the site's public key.</summary>
    public static Verification Verify(ReadOnlyMemory<byte> file, ECDsa publicKey)
    {
        if (!SignedFile.TryRead(file, Format, ["entries", "format", "head", "leaves", "signature"], out JsonElement export, out string why))
        {
            return new Verification(false, why);
        }

        if (!SignedFile.TryHead(export, "head", "signature", publicKey, out TreeHead? head, out why))
        {
            return new Verification(false, why);
        }

        if (export.GetProperty("entries").ValueKind != JsonValueKind.Array || export.GetProperty("leaves").ValueKind != JsonValueKind.Array)
        {
            return new Verification(false, "Entries and leaves must be lists.");
        }

        JsonElement[] entries = [.. export.GetProperty("entries").EnumerateArray()];
        JsonElement[] leaves = [.. export.GetProperty("leaves").EnumerateArray()];
        if (entries.Length != head!.Size || leaves.Length != head.Size)
        {
            return new Verification(
                false, $"The signed head counts {head.Size} entries; the file has {entries.Length} entries and {leaves.Length} leaf hashes.");
        }

        var frontier = new MerkleFrontier();
        for (int i = 0; i < entries.Length; i++)
        {
            if (entries[i].ValueKind != JsonValueKind.Object
                || !entries[i].TryGetProperty("index", out JsonElement index)
                || index.ValueKind != JsonValueKind.Number || !index.TryGetInt64(out long number) || number != i)
            {
                return new Verification(false, $"Entry {i} does not carry the index {i}: entries are missing, added or out of order.");
            }

            byte[] leaf = MerkleTree.LeafHash(CanonicalJson.Of(entries[i]));
            if (leaves[i].ValueKind != JsonValueKind.String || leaves[i].GetString() != Convert.ToHexStringLower(leaf))
            {
                return new Verification(false, $"Entry {i} does not have its leaf hash: the entry or the hash was changed.");
            }

            frontier.Append(leaf);
        }

        return frontier.Root().AsSpan().SequenceEqual(head.Root)
            ? new Verification(true, string.Create(CultureInfo.InvariantCulture, $"All {head.Size} entries are as signed by {head.Origin} at {head.At:yyyy-MM-dd HH:mm:ss} UTC."))
            : new Verification(false, "The entries do not have the signed root: one was changed together with its leaf hash; which, the file cannot tell.");
    }
}
