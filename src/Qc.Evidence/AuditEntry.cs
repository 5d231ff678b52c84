using System.Text.Json;
using System.Text.Json.Nodes;

namespace Qc.Evidence;

/// <summary>
/// One entry of the audit log: who did what to which subject, when, why, and its state before and after. Its leaf in the
/// Merkle tree is the canonical JSON (RFC 8785) of the object with the members below, null ones left out:
/// <c>{"action","actor","after","at","before","index","reason","subjectId","subjectType"}</c>.
/// </summary>
/// <param name="Index">Position in the log, from 0.</param>
/// <param name="At">Time of the database, UTC.</param>
/// <param name="Actor">"person:{user}", "key:{id}" or "service".</param>
/// <param name="Action">What was done, e.g. "lot.submitted".</param>
/// <param name="SubjectType">Kind of the subject, e.g. "lot".</param>
/// <param name="SubjectId">Its identifier.</param>
/// <param name="Reason">Why, where a reason is due.</param>
/// <param name="Before">State before, as JSON.</param>
/// <param name="After">State after, as JSON.</param>
public sealed record AuditEntry(
    long Index,
    DateTimeOffset At,
    string Actor,
    string Action,
    string SubjectType,
    string SubjectId,
    string? Reason,
    JsonNode? Before,
    JsonNode? After)
{
    /// <summary>The canonical bytes: content of the leaf.</summary>
    public byte[] ToCanonicalBytes()
    {
        var members = new JsonObject
        {
            ["index"] = Index,
            ["at"] = At.UtcDateTime.ToString("yyyy-MM-ddTHH:mm:ss.ffffffZ", System.Globalization.CultureInfo.InvariantCulture),
            ["actor"] = Actor,
            ["action"] = Action,
            ["subjectType"] = SubjectType,
            ["subjectId"] = SubjectId,
        };
        AddIfThere(members, "reason", Reason is null ? null : JsonValue.Create(Reason));
        AddIfThere(members, "before", Before);
        AddIfThere(members, "after", After);
        return CanonicalJson.Of(JsonSerializer.SerializeToElement(members));
    }

    private static void AddIfThere(JsonObject members, string name, JsonNode? value)
    {
        if (value is not null)
        {
            members[name] = value.DeepClone();
        }
    }
}
