using System.Text;
using Microsoft.EntityFrameworkCore;
using Qc.Evidence;
using Qc.Records.Audit;
using Xunit;

namespace Qc.Records.Tests.Audit;

[Collection(DatabaseCollection.Name)]
public class AuditLogTests(DatabaseFixture database)
{
    [Fact]
    public async Task Concurrent_writers_leave_no_gap_and_the_stored_tree_is_that_of_the_stored_entries()
    {
        (_, string application) = await database.NewDatabaseAsync();
        const int writers = 8;
        const int each = 25;
        await Task.WhenAll(Enumerable.Range(0, writers).Select(async w =>
        {
            for (int i = 0; i < each; i++)
            {
                await Write(application, $"P-{w}-{i}", 1 + (i % 3));
            }
        }));
        await using QcDbContext context = DatabaseFixture.Context(application);
        AuditRow[] rows = await context.AuditRows.OrderBy(r => r.Index).ToArrayAsync();
        Assert.Equal(Enumerable.Range(0, rows.Length).Select(i => (long)i), rows.Select(r => r.Index));
        Assert.Equal(writers * each, await context.Products.CountAsync());
        Assert.Equal(Recompute(rows), MerkleTree.Root(rows.Length, context.NodeReader()));
        byte[] oldRoot = MerkleTree.Root(57, context.NodeReader());
        Assert.True(MerkleTree.VerifyConsistency(
            57, rows.Length, oldRoot, MerkleTree.Root(rows.Length, context.NodeReader()), MerkleTree.ConsistencyProof(57, rows.Length, context.NodeReader())));
    }

    [Fact]
    public async Task A_failure_after_the_entry_leaves_neither_fact_nor_entry()
    {
        (_, string application) = await database.NewDatabaseAsync();
        await using (QcDbContext context = DatabaseFixture.Context(application))
        {
            await using var transaction = await context.Database.BeginTransactionAsync();
            context.Add(Sample.Product());
            await context.SaveWithAuditAsync([new AuditDraft("person:a", "product.created", "product", "x")]);
            await transaction.RollbackAsync();
        }

        await using QcDbContext after = DatabaseFixture.Context(application);
        Assert.Equal(0, await after.Products.CountAsync());
        Assert.Equal(0, await after.AuditSizeAsync());
        Assert.Equal(0, await after.MerkleNodes.CountAsync());
    }

    [Fact]
    public async Task A_fact_cannot_be_saved_with_its_entry_outside_a_transaction()
    {
        (_, string application) = await database.NewDatabaseAsync();
        await using QcDbContext context = DatabaseFixture.Context(application);
        await Assert.ThrowsAsync<InvalidOperationException>(() => context.SaveWithAuditAsync([new AuditDraft("a", "b", "c", "d")]));
    }

    [Fact]
    public async Task An_owner_who_disables_the_triggers_and_edits_an_entry_is_found_by_recomputation()
    {
        (string owner, string application) = await database.NewDatabaseAsync();
        for (int i = 0; i < 5; i++)
        {
            await Write(application, $"P-{i}", 1);
        }

        await using QcDbContext context = DatabaseFixture.Context(application);
        byte[] root = MerkleTree.Root(5, context.NodeReader());
        Assert.Equal(Recompute(await context.AuditRows.AsNoTracking().OrderBy(r => r.Index).ToArrayAsync()), root);
        await DatabaseFixture.Execute(
            owner,
            "ALTER TABLE qc.audit_rows DISABLE TRIGGER ALL; UPDATE qc.audit_rows SET canonical_json = replace(canonical_json, 'person:a', 'person:b') WHERE index = 2");
        Assert.NotEqual(Recompute(await context.AuditRows.AsNoTracking().OrderBy(r => r.Index).ToArrayAsync()), root);
    }

    private static async Task Write(string connection, string code, int entries)
    {
        await using QcDbContext context = DatabaseFixture.Context(connection);
        await using var transaction = await context.Database.BeginTransactionAsync();
        context.Add(Sample.Product(code));
        await context.SaveWithAuditAsync(
            [.. Enumerable.Range(0, entries).Select(e => new AuditDraft("person:a", "product.created", "product", $"{code}/{e}"))]);
        await transaction.CommitAsync();
    }

    /// <summary>Root from the entries alone, without the stored hashes.</summary>
    private static byte[] Recompute(AuditRow[] rows)
    {
        var nodes = new Dictionary<(int, long), byte[]>();
        foreach (AuditRow row in rows)
        {
            byte[] leaf = MerkleTree.LeafHash(Encoding.UTF8.GetBytes(row.CanonicalJson));
            foreach ((int level, long index, byte[] hash) in MerkleTree.NodesFinishedBy(row.Index, leaf, (l, i) => nodes[(l, i)]))
            {
                nodes[(level, index)] = hash;
            }
        }

        return MerkleTree.Root(rows.Length, (l, i) => nodes[(l, i)]);
    }
}
