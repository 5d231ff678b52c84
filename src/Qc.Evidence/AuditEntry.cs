using System.Text.Json;
using System.Text.Json.Nodes;

namespace Qc.Evidence;

/// <summary>
/// One entry of the audit log: who did what to which subject, when, why, and its state before and after. Its leaf in the
/// Merkle tree is the canonical JSON (RFC 8785) of the object with the members below, null ones left out:
/// <c>{"action","actor","after","at","before","index","reason","records","subjectId","subjectType"}</c>; records are
/// <c>[{"key","sha256","table"}, ...]</c>, so that a row that was changed, removed or slipped in later is found.
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
/// <param name="Records">The rows that the transaction wrote; in its first entry.</param>
public sealed record AuditEntry(
    long Index,
    DateTimeOffset At,
    string Actor,
    string Action,
    string SubjectType,
    string SubjectId,
    string? Reason,
    JsonNode? Before,
    JsonNode? After,
    IReadOnlyList<RecordReference>? Records = null)
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
        if (Records is { Count: > 0 })
        {
            members["records"] = new JsonArray([.. Records.Select(r => (JsonNode)new JsonObject { ["table"] = r.Table, ["key"] = r.Key, ["sha256"] = r.Sha256 })]);
        }

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

/// <summary>A row of a record table, bound by its hash.</summary>
/// <param name="Table">Table.</param>
/// <param name="Key">Values of its primary key, joined by "/".</param>
/// <param name="Sha256">SHA-256 of the canonical JSON of the row, lower-case hex.</param>
public sealed record RecordReference(string Table, string Key, string Sha256);
