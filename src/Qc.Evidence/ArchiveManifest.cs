using System.Security.Cryptography;
using System.Text.Json;
using System.Text.Json.Nodes;

namespace Qc.Evidence;

/// <summary>
/// The list of what is in a lot's archive: canonical JSON (RFC 8785) of
/// <c>{"files":{"{name}":"{sha256 hex}", ...},"format":"qc lot archive 1","lotId"}</c> in the file manifest.json, and its ECDSA
/// signature (P-256, SHA-256, IEEE P1363 form, base64) by the site's log key in manifest.sig. Every other file of the archive is
/// listed, and nothing else is in it.
/// </summary>
public static class ArchiveManifest
{
    /// <summary>Name of the manifest.</summary>
    public const string FileName = "manifest.json";

    /// <summary>Name of its signature.</summary>
    public const string SignatureName = "manifest.sig";

    private const string Format = "qc lot archive 1";

    /// <summary>Writes the manifest of these files.</summary>
    public static byte[] Write(string lotId, IReadOnlyDictionary<string, byte[]> files)
    {
        var list = new JsonObject();
        foreach ((string name, byte[] bytes) in files)
        {
            list[name] = Convert.ToHexStringLower(SHA256.HashData(bytes));
        }

        return CanonicalJson.Of(JsonSerializer.SerializeToElement(new JsonObject { ["format"] = Format, ["lotId"] = lotId, ["files"] = list }));
    }

    /// <summary>Signs a manifest; base64.</summary>
    public static string Sign(byte[] manifest, ECDsa key) => Convert.ToBase64String(key.SignData(manifest, HashAlgorithmName.SHA256));

    /// <summary>Checks signature, list and files, and each proof (proofs/*.json) among them.</summary>
    /// <param name="files">All files of the archive by name, manifest and signature among them.</param>
    /// <param name="publicKey">The site's key.</param>
    public static Verification Verify(IReadOnlyDictionary<string, byte[]> files, ECDsa publicKey)
    {
        if (!files.TryGetValue(FileName, out byte[]? manifest) || !files.TryGetValue(SignatureName, out byte[]? signature))
        {
            return new Verification(false, "The archive has no signed manifest.");
        }

        byte[] signed = new byte[128];
        string base64 = System.Text.Encoding.ASCII.GetString(signature);
        if (!Convert.TryFromBase64String(base64, signed, out int length)
            || Convert.ToBase64String(signed, 0, length) != base64
            || !publicKey.VerifyData(manifest, signed.AsSpan(0, length), HashAlgorithmName.SHA256))
        {
            return new Verification(false, "The manifest is not signed by this key, or was changed.");
        }

        if (!SignedFile.TryRead(manifest, Format, ["files", "format", "lotId"], out JsonElement root, out string why))
        {
            return new Verification(false, why);
        }

        JsonProperty[] listed = [.. root.GetProperty("files").EnumerateObject()];
        foreach (JsonProperty file in listed)
        {
            if (!files.TryGetValue(file.Name, out byte[]? bytes))
            {
                return new Verification(false, $"{file.Name} is missing.");
            }

            if (Convert.ToHexStringLower(SHA256.HashData(bytes)) != file.Value.GetString())
            {
                return new Verification(false, $"{file.Name} was changed.");
            }

            if (file.Name.StartsWith("proofs/", StringComparison.Ordinal) && LogProof.Verify(bytes, publicKey) is { IsValid: false } broken)
            {
                return new Verification(false, $"{file.Name}: {broken.Message}");
            }
        }

        string? added = files.Keys.Except(listed.Select(f => f.Name)).FirstOrDefault(n => n is not (FileName or SignatureName));
        return added is not null
            ? new Verification(false, $"{added} was added.")
            : new Verification(true, $"{listed.Length} files of lot {root.GetProperty("lotId").GetString()} are as the site signed them, {listed.Count(f => f.Name.StartsWith("proofs/", StringComparison.Ordinal))} proofs of log entries among them.");
    }
}
