using System.Globalization;
using System.Security.Cryptography;
using System.Text;
using System.Text.Json;
using System.Text.Json.Nodes;

namespace Qc.Evidence;

/// <summary>
/// Proofs about the audit log as files, canonical JSON (RFC 8785) both:
/// <code>
/// {"entry":{entry},"format":"qc inclusion proof 1","head":"{text}","path":["{hex}", ...],"signature":"{base64}"}
/// {"format":"qc consistency proof 1","newHead":"{text}","newSignature":"{base64}","oldHead":"{text}","oldSignature":"{base64}","path":["{hex}", ...]}
/// </code>
/// The first shows that an entry is in the log that a head signs, the second that a log only grew from an old head to a new
/// one. Paths are those of RFC 9162, sections 2.1.3 and 2.1.4.
/// </summary>
public static class LogProof
{
    private const string Inclusion = "qc inclusion proof 1";
    private const string Consistency = "qc consistency proof 1";

    /// <summary>Writes an inclusion proof.</summary>
    public static byte[] WriteInclusion(string canonicalEntry, IEnumerable<byte[]> path, string head, string signature) =>
        CanonicalJson.Of(JsonSerializer.SerializeToElement(new JsonObject
        {
            ["format"] = Inclusion,
            ["entry"] = JsonNode.Parse(canonicalEntry),
            ["path"] = Hex(path),
            ["head"] = head,
            ["signature"] = signature,
        }));

    /// <summary>Writes a consistency proof.</summary>
    public static byte[] WriteConsistency(
        string oldHead, string oldSignature, string newHead, string newSignature, IEnumerable<byte[]> path) =>
        CanonicalJson.Of(JsonSerializer.SerializeToElement(new JsonObject
        {
            ["format"] = Consistency,
            ["oldHead"] = oldHead,
            ["oldSignature"] = oldSignature,
            ["newHead"] = newHead,
            ["newSignature"] = newSignature,
            ["path"] = Hex(path),
        }));

    /// <summary>Checks a proof of either kind against the site's public key.</summary>
    public static Verification Verify(ReadOnlyMemory<byte> file, ECDsa publicKey)
    {
        bool isConsistency = file.Span.IndexOf(Encoding.UTF8.GetBytes(Consistency)) >= 0
            && file.Span.StartsWith("{\"format\""u8);
        return isConsistency ? VerifyConsistency(file, publicKey) : VerifyInclusion(file, publicKey);
    }

    private static Verification VerifyInclusion(ReadOnlyMemory<byte> file, ECDsa publicKey)
    {
        if (!SignedFile.TryRead(file, Inclusion, ["entry", "format", "head", "path", "signature"], out JsonElement proof, out string why)
            || !SignedFile.TryHead(proof, "head", "signature", publicKey, out TreeHead? head, out why))
        {
            return new Verification(false, why);
        }

        JsonElement entry = proof.GetProperty("entry");
        if (entry.ValueKind != JsonValueKind.Object
            || !entry.TryGetProperty("index", out JsonElement number)
            || number.ValueKind != JsonValueKind.Number || !number.TryGetInt64(out long index)
            || !SignedFile.TryHashes(proof.GetProperty("path"), out byte[][] path))
        {
            return new Verification(false, "The entry has no index, or the path is not a list of hashes.");
        }

        byte[] leaf = MerkleTree.LeafHash(CanonicalJson.Of(entry));
        return MerkleTree.VerifyInclusion(index, head!.Size, leaf, path, head.Root)
            ? new Verification(true, string.Create(CultureInfo.InvariantCulture, $"Entry {index} is in the log of {head.Size} entries signed by {head.Origin} at {head.At:yyyy-MM-dd HH:mm:ss} UTC."))
            : new Verification(false, $"Entry {index} is not in the signed log, or the path is not its own.");
    }

    private static Verification VerifyConsistency(ReadOnlyMemory<byte> file, ECDsa publicKey)
    {
        string[] members = ["format", "newHead", "newSignature", "oldHead", "oldSignature", "path"];
        if (!SignedFile.TryRead(file, Consistency, members, out JsonElement proof, out string why)
            || !SignedFile.TryHead(proof, "oldHead", "oldSignature", publicKey, out TreeHead? old, out why)
            || !SignedFile.TryHead(proof, "newHead", "newSignature", publicKey, out TreeHead? current, out why))
        {
            return new Verification(false, why);
        }

        return old!.Origin == current!.Origin
            && SignedFile.TryHashes(proof.GetProperty("path"), out byte[][] path)
            && MerkleTree.VerifyConsistency(old.Size, current.Size, old.Root, current.Root, path)
            ? new Verification(true, $"The log of {current.Size} entries begins with the {old.Size} entries of the old head, unchanged.")
            : new Verification(false, "The new log is not shown to begin with the entries of the old one.");
    }

    private static JsonArray Hex(IEnumerable<byte[]> hashes) =>
        new([.. hashes.Select(h => (JsonNode)JsonValue.Create(Convert.ToHexStringLower(h)))]);
}
