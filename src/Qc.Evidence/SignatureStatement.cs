using System.Globalization;
using System.Security.Cryptography;
using System.Text;
using System.Text.Json.Nodes;

namespace Qc.Evidence;

/// <summary>Meanings of a signature (21 CFR 11.50).</summary>
public static class SignatureMeaning
{
    /// <summary>The signer has reviewed.</summary>
    public const string Reviewed = "reviewed";

    /// <summary>The signer approves.</summary>
    public const string Approved = "approved";

    /// <summary>The signer rejects.</summary>
    public const string Rejected = "rejected";
}

/// <summary>
/// What an electronic signature binds together (21 CFR 11.50 and 11.70): who, when, with which meaning, on what, and the
/// SHA-256 of the canonical content that was on the screen. Its bytes are the canonical JSON (RFC 8785) of
/// <c>{"at","contentSha256","format","meaning","printedName","subjectId","subjectType","user"}</c>, all of them strings,
/// format "qc signature 1". A signature cannot be moved to another record: subject and hash are inside what is hashed.
/// </summary>
/// <param name="PrintedName">The signer's name as printed.</param>
/// <param name="User">The signer's user name.</param>
/// <param name="At">When, UTC; kept to the microsecond.</param>
/// <param name="Meaning">One of <see cref="SignatureMeaning"/>.</param>
/// <param name="SubjectType">Kind of what is signed, e.g. "lot".</param>
/// <param name="SubjectId">Its identifier.</param>
/// <param name="ContentSha256">SHA-256 of the canonical content shown, lower-case hex.</param>
public sealed record SignatureStatement(
    string PrintedName, string User, DateTimeOffset At, string Meaning, string SubjectType, string SubjectId, string ContentSha256)
{
    /// <summary>The canonical bytes.</summary>
    public byte[] ToCanonicalBytes() => CanonicalJson.Of(new JsonObject
    {
        ["format"] = "qc signature 1",
        ["printedName"] = PrintedName,
        ["user"] = User,
        ["at"] = At.UtcDateTime.ToString("yyyy-MM-ddTHH:mm:ss.ffffffZ", CultureInfo.InvariantCulture),
        ["meaning"] = Meaning,
        ["subjectType"] = SubjectType,
        ["subjectId"] = SubjectId,
        ["contentSha256"] = ContentSha256,
    }.ToJsonString());

    /// <summary>The canonical bytes as text.</summary>
    public string ToCanonicalText() => Encoding.UTF8.GetString(ToCanonicalBytes());

    /// <summary>SHA-256 of the canonical bytes, lower-case hex.</summary>
    public string Sha256() => Convert.ToHexStringLower(SHA256.HashData(ToCanonicalBytes()));

    /// <summary>SHA-256 of the canonical form of a JSON text, lower-case hex: what <see cref="ContentSha256"/> holds.</summary>
    /// <exception cref="System.Text.Json.JsonException">The text is not JSON.</exception>
    public static string HashOfContent(string json) => Convert.ToHexStringLower(SHA256.HashData(CanonicalJson.Of(json)));
}
