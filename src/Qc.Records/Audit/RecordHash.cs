using System.Globalization;
using System.Security.Cryptography;
using System.Text.Json.Nodes;
using Microsoft.EntityFrameworkCore;
using Microsoft.EntityFrameworkCore.Metadata;
using Qc.Evidence;

namespace Qc.Records.Audit;

/// <summary>
/// Hash of a row: SHA-256 of the canonical JSON (RFC 8785) of an object with each column by its name. Times are UTC to the
/// microsecond, which is what the database keeps; bytes stand as the lower-case hex of their SHA-256.
/// </summary>
internal static class RecordHash
{
    private static readonly string[] Evidence = ["audit_rows", "merkle_nodes", "tree_heads"];

    /// <summary>Whether the rows of a type are facts; the log, its tree and its heads are the evidence about them.</summary>
    public static bool IsRecord(IReadOnlyEntityType type) => type.GetSchema() == "qc" && !Evidence.Contains(type.GetTableName());

    /// <summary>Table, key and hash of a row that was saved or read.</summary>
    public static RecordReference Of(IEntityType type, object row)
    {
        var table = StoreObjectIdentifier.Table(type.GetTableName()!, type.GetSchema());
        var columns = new JsonObject();
        foreach (IProperty property in type.GetProperties())
        {
            columns[property.GetColumnName(table)!] = Json(property.GetGetter().GetClrValue(row));
        }

        string key = string.Join('/', type.FindPrimaryKey()!.Properties.Select(p => Convert.ToString(p.GetGetter().GetClrValue(row), CultureInfo.InvariantCulture)));
        return new RecordReference(table.Name, key, SignatureStatement.HashOfContent(columns.ToJsonString()));
    }

    private static JsonNode? Json(object? value) => value switch
    {
        null => null,
        string text => text,
        bool flag => flag,
        int number => number,
        long number => number,
        double number => number,
        DateTimeOffset at => at.UtcDateTime.ToString("yyyy-MM-ddTHH:mm:ss.ffffffZ", CultureInfo.InvariantCulture),
        byte[] bytes => Convert.ToHexStringLower(SHA256.HashData(bytes)),
        _ => throw new NotSupportedException($"A column of type {value.GetType()} has no canonical form yet."),
    };
}
