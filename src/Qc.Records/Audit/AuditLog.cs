using System.Text;
using System.Text.Json.Nodes;
using Microsoft.EntityFrameworkCore;
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
    private const long LockKey = 0x5143_4155; // "QCAU"

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
        await context.Database.ExecuteSqlRawAsync($"SELECT pg_advisory_xact_lock({LockKey})", cancellation);
        DateTimeOffset now = await context.DatabaseTimeAsync(cancellation);
        long size = await context.AuditSizeAsync(cancellation);
        var written = new Dictionary<(int, long), byte[]>();
        foreach (AuditDraft draft in drafts)
        {
            var entry = new AuditEntry(
                size, now, draft.Actor, draft.Action, draft.SubjectType, draft.SubjectId, draft.Reason, draft.Before, draft.After);
            byte[] content = entry.ToCanonicalBytes();
            byte[] leaf = MerkleTree.LeafHash(content);
            context.AuditRows.Add(new AuditRow
            {
                Index = size,
                At = now,
                Actor = draft.Actor,
                Action = draft.Action,
                SubjectType = draft.SubjectType,
                SubjectId = draft.SubjectId,
                CanonicalJson = Encoding.UTF8.GetString(content),
                LeafHash = leaf,
            });
            Dictionary<(int, long), byte[]> left = await context.LeftNeighboursAsync(size, written, cancellation);
            foreach ((int level, long index, byte[] hash) in MerkleTree.NodesFinishedBy(size, leaf, (l, i) => left[(l, i)]))
            {
                written[(level, index)] = hash;
                context.MerkleNodes.Add(new MerkleNode { Level = level, Index = index, Hash = hash });
            }

            size++;
        }

        await context.SaveChangesAsync(cancellation);
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

    /// <summary>The nodes to the left that an append at this index is hashed with.</summary>
    private static async Task<Dictionary<(int, long), byte[]>> LeftNeighboursAsync(
        this QcDbContext context, long index, Dictionary<(int, long), byte[]> written, CancellationToken cancellation)
    {
        var needed = new Dictionary<(int, long), byte[]>();
        int level = 0;
        for (long i = index; (i & 1) == 1; i >>= 1)
        {
            int l = level;
            long left = i - 1;
            needed[(l, left)] = written.TryGetValue((l, left), out byte[]? hash)
                ? hash
                : (await context.MerkleNodes.AsNoTracking().SingleAsync(n => n.Level == l && n.Index == left, cancellation)).Hash;
            level++;
        }

        return needed;
    }
}
