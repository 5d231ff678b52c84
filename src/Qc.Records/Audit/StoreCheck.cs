using System.Reflection;
using System.Security.Cryptography;
using System.Text;
using System.Text.Json;
using Microsoft.EntityFrameworkCore;
using Microsoft.EntityFrameworkCore.Metadata;
using Qc.Evidence;

namespace Qc.Records.Audit;

/// <summary>What a check of the whole store found.</summary>
/// <param name="Entries">Audit entries read.</param>
/// <param name="Records">Rows of record tables read.</param>
/// <param name="Findings">What is wrong, one plain sentence each; empty where all is well.</param>
public sealed record StoreCheckResult(long Entries, long Records, IReadOnlyList<string> Findings);

/// <summary>
/// Checks the live database against its own evidence: every entry against its leaf and its searchable columns, the stored tree
/// and every signed head against the entries, and every row of every record table against the hash that the log has of it.
/// It finds rows that were changed, removed or slipped in past the triggers. A log rewritten as a whole, tree included, is
/// found by the signed heads; where those were removed too, by a head kept elsewhere (a certificate carries one).
/// </summary>
public static class StoreCheck
{
    private static readonly MethodInfo HashRows = typeof(StoreCheck).GetMethod(nameof(HashRowsAsync), BindingFlags.NonPublic | BindingFlags.Static)!;

    /// <summary>Reads everything once; call it in a transaction that sees one state of the database.</summary>
    /// <param name="context">The store.</param>
    /// <param name="publicKey">Key that signed the heads.</param>
    /// <param name="cancellation">Gives up.</param>
    public static async Task<StoreCheckResult> CheckStoreAsync(this QcDbContext context, ECDsa publicKey, CancellationToken cancellation = default)
    {
        var findings = new List<string>();
        var known = new Dictionary<(string Table, string Key), string>();
        (long size, Dictionary<(int, long), byte[]> tree) = await CheckEntriesAsync(context, findings, known, cancellation);
        await CheckTreeAsync(context, tree, findings, cancellation);
        await CheckHeadsAsync(context, size, tree, publicKey, findings, cancellation);
        long records = 0;
        foreach (IEntityType type in context.Model.GetEntityTypes().Where(RecordHash.IsRecord))
        {
            records += await (Task<long>)HashRows.MakeGenericMethod(type.ClrType).Invoke(null, [context, type, known, findings, cancellation])!;
        }

        findings.AddRange(known.Keys.Select(k => $"The row {k.Key} of {k.Table} is in the log and no longer in the database."));
        return new StoreCheckResult(size, records, findings);
    }

    private static async Task<(long Size, Dictionary<(int, long), byte[]> Tree)> CheckEntriesAsync(
        QcDbContext context, List<string> findings, Dictionary<(string, string), string> known, CancellationToken cancellation)
    {
        var tree = new Dictionary<(int, long), byte[]>();
        long size = 0;
        await foreach (AuditRow row in context.AuditRows.AsNoTracking().OrderBy(r => r.Index).AsAsyncEnumerable().WithCancellation(cancellation))
        {
            if (row.Index != size)
            {
                findings.Add($"Entry {size} is missing from the log; the next is {row.Index}.");
                break; // What follows cannot be hashed in its place.
            }

            byte[] leaf = MerkleTree.LeafHash(Encoding.UTF8.GetBytes(row.CanonicalJson));
            if (!leaf.AsSpan().SequenceEqual(row.LeafHash))
            {
                findings.Add($"Entry {size} does not have its leaf hash: it was changed.");
            }

            ReadEntry(row, findings, known);
            foreach ((int level, long index, byte[] hash) in MerkleTree.NodesFinishedBy(size, leaf, (l, i) => tree[(l, i)]))
            {
                tree[(level, index)] = hash;
            }

            size++;
        }

        return (size, tree);
    }

    private static void ReadEntry(AuditRow row, List<string> findings, Dictionary<(string, string), string> known)
    {
        try
        {
            using JsonDocument entry = JsonDocument.Parse(row.CanonicalJson);
            JsonElement root = entry.RootElement;
            bool agrees = root.GetProperty("index").GetInt64() == row.Index
                && root.GetProperty("at").GetDateTimeOffset() == row.At
                && root.GetProperty("actor").GetString() == row.Actor
                && root.GetProperty("action").GetString() == row.Action
                && root.GetProperty("subjectType").GetString() == row.SubjectType
                && root.GetProperty("subjectId").GetString() == row.SubjectId;
            if (!agrees)
            {
                findings.Add($"The columns of entry {row.Index} do not say what the entry says.");
            }

            if (!root.TryGetProperty("records", out JsonElement records))
            {
                return;
            }

            foreach (JsonElement record in records.EnumerateArray())
            {
                var key = (record.GetProperty("table").GetString()!, record.GetProperty("key").GetString()!);
                if (!known.TryAdd(key, record.GetProperty("sha256").GetString()!))
                {
                    findings.Add($"Entry {row.Index} names the row {key.Item2} of {key.Item1} a second time.");
                }
            }
        }
        catch (Exception e) when (e is JsonException or KeyNotFoundException or InvalidOperationException or FormatException)
        {
            // The parser says by exceptions that an entry is not what the service writes.
            findings.Add($"Entry {row.Index} is not in the form of an entry.");
        }
    }

    private static async Task CheckTreeAsync(QcDbContext context, Dictionary<(int, long), byte[]> tree, List<string> findings, CancellationToken cancellation)
    {
        long stored = 0;
        await foreach (MerkleNode node in context.MerkleNodes.AsNoTracking().AsAsyncEnumerable().WithCancellation(cancellation))
        {
            stored++;
            if (!tree.TryGetValue((node.Level, node.Index), out byte[]? hash) || !hash.AsSpan().SequenceEqual(node.Hash))
            {
                findings.Add($"Node {node.Index} of level {node.Level} of the stored tree is not that of the entries.");
            }
        }

        if (stored != tree.Count)
        {
            findings.Add($"The stored tree has {stored} nodes; the entries make {tree.Count}.");
        }
    }

    private static async Task CheckHeadsAsync(
        QcDbContext context, long size, Dictionary<(int, long), byte[]> tree, ECDsa publicKey, List<string> findings, CancellationToken cancellation)
    {
        await foreach (TreeHeadRow row in context.TreeHeads.AsNoTracking().OrderBy(h => h.Size).AsAsyncEnumerable().WithCancellation(cancellation))
        {
            TreeHead? head = TreeHead.Parse(row.SignedText);
            if (head is null || !TreeHead.Verify(row.SignedText, row.Signature, publicKey) || head.Size != row.Size || !head.Root.AsSpan().SequenceEqual(row.RootHash))
            {
                findings.Add($"The signed head over {row.Size} entries is not signed by this site, or was changed.");
            }
            else if (head.Size > size)
            {
                findings.Add($"{head.Size} entries were signed at {head.At:u}; the log now has {size}: entries were removed.");
            }
            else if (!MerkleTree.Root(head.Size, (l, i) => tree[(l, i)]).AsSpan().SequenceEqual(head.Root))
            {
                findings.Add($"The first {head.Size} entries are not those signed at {head.At:u}: the log was rewritten.");
            }
        }
    }

    private static async Task<long> HashRowsAsync<T>(
        QcDbContext context, IEntityType type, Dictionary<(string, string), string> known, List<string> findings, CancellationToken cancellation)
        where T : class
    {
        long count = 0;
        await foreach (T row in context.Set<T>().AsNoTracking().AsAsyncEnumerable().WithCancellation(cancellation))
        {
            count++;
            RecordReference now = RecordHash.Of(type, row);
            if (!known.Remove((now.Table, now.Key), out string? sha256))
            {
                findings.Add($"The row {now.Key} of {now.Table} is not in the log: it was slipped in, or its key was changed.");
            }
            else if (sha256 != now.Sha256)
            {
                findings.Add($"The row {now.Key} of {now.Table} was changed after it was recorded.");
            }
        }

        return count;
    }
}
