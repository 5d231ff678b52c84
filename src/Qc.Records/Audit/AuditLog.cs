using System.Data.Common;
using System.Text;
using System.Text.Json.Nodes;
using Microsoft.EntityFrameworkCore;
using Microsoft.EntityFrameworkCore.Storage;
using Qc.Evidence;

namespace Qc.Records.Audit;

/// <summary>What is to be written to the audit log; index and time are given when it is appended.</summary>
/// <param name="Actor">"person:{user}", "key:{id}" or "service".</param>
/// <param name="Action">What is done, e.g. "lot.submitted".</param>
/// <param name="SubjectType">Kind of the subject.</param>
/// <param name="SubjectId">Its identifier.</param>
/// <param name="Reason">Why, where a reason is due.</param>
/// <param name="Before">State before.</param>
/// <param name="After">State after.</param>
public sealed record AuditDraft(
    string Actor, string Action, string SubjectType, string SubjectId, string? Reason = null, JsonNode? Before = null, JsonNode? After = null);

/// <summary>
/// The audit log in the database. Entries are appended in the transaction of the fact they tell of, one writer at a time
/// from the append to the commit, so that indices have no gap and the tree is that of the committed order.
/// </summary>
public static class AuditLog
{
    /// <summary>
    /// Saves the pending facts and appends their entries, all in the context's open transaction. The caller commits.
    /// Call it last in a transaction: other writers wait from here to the commit.
    /// </summary>
    /// <exception cref="InvalidOperationException">No transaction is open.</exception>
    public static async Task SaveWithAuditAsync(
        this QcDbContext context, IReadOnlyList<AuditDraft> drafts, CancellationToken cancellation = default)
    {
        if (context.Database.CurrentTransaction is null)
        {
            throw new InvalidOperationException("A fact and its audit entry need one transaction; begin it before.");
        }

        await context.SaveChangesAsync(cancellation);
        (long size, DateTimeOffset now, Dictionary<(int, long), byte[]> nodes) = await context.BeginAppendAsync(cancellation);
        IReadOnlyList<RecordReference>? records = context.TakeWritten();
        await using DbBatch batch = context.Database.GetDbConnection().CreateBatch();
        batch.Transaction = context.Database.CurrentTransaction!.GetDbTransaction();
        foreach (AuditDraft draft in drafts)
        {
            var entry = new AuditEntry(
                size, now, draft.Actor, draft.Action, draft.SubjectType, draft.SubjectId, draft.Reason, draft.Before, draft.After, records);
            records = null; // The first entry names them.
            byte[] content = entry.ToCanonicalBytes();
            byte[] leaf = MerkleTree.LeafHash(content);
            Add(
                batch,
                "INSERT INTO qc.audit_rows (index, at, actor, action, subject_type, subject_id, canonical_json, leaf_hash) VALUES ($1, $2, $3, $4, $5, $6, $7, $8)",
                size, now.UtcDateTime, draft.Actor, draft.Action, draft.SubjectType, draft.SubjectId, Encoding.UTF8.GetString(content), leaf);
            foreach ((int level, long index, byte[] hash) in MerkleTree.NodesFinishedBy(size, leaf, (l, i) => nodes[(l, i)]))
            {
                nodes[(level, index)] = hash;
                Add(batch, "INSERT INTO qc.merkle_nodes (level, index, hash) VALUES ($1, $2, $3)", level, index, hash);
            }

            size++;
        }

        // In one exchange, without change tracking: everybody else waits.
        await batch.ExecuteNonQueryAsync(cancellation);
    }

    /// <summary>Number of entries.</summary>
    public static async Task<long> AuditSizeAsync(this QcDbContext context, CancellationToken cancellation = default) =>
        (await context.AuditRows.MaxAsync(r => (long?)r.Index, cancellation) ?? -1) + 1;

    /// <summary>Time of the database, UTC, at the start of the statement.</summary>
    public static async Task<DateTimeOffset> DatabaseTimeAsync(this QcDbContext context, CancellationToken cancellation = default) =>
        await context.Database.SqlQueryRaw<DateTimeOffset>("SELECT date_trunc('microseconds', clock_timestamp()) AS \"Value\"").SingleAsync(cancellation);

    /// <summary>Reads tree nodes for proofs; each asks the database once.</summary>
    public static MerkleTree.NodeReader NodeReader(this QcDbContext context)
    {
        var known = new Dictionary<(int, long), byte[]>();
        return (level, index) =>
        {
            if (!known.TryGetValue((level, index), out byte[]? hash))
            {
                hash = context.MerkleNodes.AsNoTracking().Single(n => n.Level == level && n.Index == index).Hash;
                known[(level, index)] = hash;
            }

            return hash;
        };
    }

    private static void Add(DbBatch batch, string sql, params ReadOnlySpan<object> values)
    {
        DbBatchCommand command = batch.CreateBatchCommand();
        command.CommandText = sql;
        foreach (object value in values)
        {
            DbParameter parameter = command.CreateParameter();
            parameter.Value = value;
            command.Parameters.Add(parameter);
        }

        batch.BatchCommands.Add(command);
    }

    /// <summary>Waits for the other writers; size, time, and the complete subtrees that make up the log, by level and index.</summary>
    private static async Task<(long Size, DateTimeOffset Now, Dictionary<(int Level, long Index), byte[]> Nodes)> BeginAppendAsync(
        this QcDbContext context, CancellationToken cancellation)
    {
        await using DbCommand command = context.Database.GetDbConnection().CreateCommand();
        command.Transaction = context.Database.CurrentTransaction!.GetDbTransaction();
        command.CommandText = "SELECT size, at, levels, hashes FROM qc.begin_audit()";
        await using DbDataReader reader = await command.ExecuteReaderAsync(cancellation);
        await reader.ReadAsync(cancellation);
        long size = reader.GetInt64(0);
        int[] levels = await reader.GetFieldValueAsync<int[]>(2, cancellation);
        byte[][] hashes = await reader.GetFieldValueAsync<byte[][]>(3, cancellation);
        return (
            size,
            await reader.GetFieldValueAsync<DateTimeOffset>(1, cancellation),
            levels.Zip(hashes).ToDictionary(n => (n.First, (size >> n.First) - 1), n => n.Second));
    }
}
