using System.Security.Cryptography;
using System.Text;
using System.Text.Json.Nodes;
using Microsoft.EntityFrameworkCore;
using Qc.Evidence;
using Qc.Records.Audit;
using Xunit;

namespace Qc.Records.Tests.Audit;

/// <summary>An attacker with the owner's password, who can switch every trigger off.</summary>
[Collection(DatabaseCollection.Name)]
public sealed class AttackTests(DatabaseFixture database) : IDisposable
{
    private const string Disarm = "DO $$ DECLARE t text; BEGIN FOR t IN SELECT tablename FROM pg_tables WHERE schemaname = 'qc' LOOP EXECUTE format('ALTER TABLE qc.%I DISABLE TRIGGER ALL', t); END LOOP; END $$;";
    private readonly ECDsa _key = ECDsa.Create(ECCurve.NamedCurves.nistP256);

    public void Dispose() => _key.Dispose();

    [Fact]
    public async Task A_store_that_nobody_touched_is_whole()
    {
        (string owner, _) = await database.NewDatabaseAsync();
        await FillAsync(owner);
        StoreCheckResult result = await CheckAsync(owner);
        Assert.Empty(result.Findings);
        await using QcDbContext context = DatabaseFixture.Context(owner);
        Assert.Equal(context.Model.GetEntityTypes().Count(RecordHash.IsRecord), (await TablesWithRowsAsync(owner)).Length);
    }

    [Fact]
    public async Task A_changed_a_removed_and_a_slipped_in_row_of_any_table_are_found()
    {
        (string owner, _) = await database.NewDatabaseAsync();
        await FillAsync(owner);
        int attacks = 0;
        foreach (string table in await TablesWithRowsAsync(owner))
        {
            string column = await ChangeableColumnAsync(owner, table);
            string key = await KeyAsync(owner, table);
            string[] statements =
            [
                $"UPDATE qc.{table} SET {column}",
                $"DELETE FROM qc.{table}",
                $"CREATE TEMP TABLE copy AS SELECT * FROM qc.{table} LIMIT 1; UPDATE copy SET {key}; INSERT INTO qc.{table} OVERRIDING SYSTEM VALUE SELECT * FROM copy",
            ];
            foreach (string statement in statements)
            {
                Assert.Contains(await FindingsAfterAsync(owner, statement), f => f.Contains(table, StringComparison.Ordinal));
                attacks++;
            }
        }

        Assert.True(attacks >= 3 * 17, $"only {attacks} attacks"); // Three ways for each table of facts.
    }

    [Theory]
    [InlineData("UPDATE qc.audit_rows SET canonical_json = replace(canonical_json, 'person:owner', 'person:other') WHERE index = 0")]
    [InlineData("UPDATE qc.audit_rows SET actor = 'person:other' WHERE index = 0")]
    [InlineData("UPDATE qc.audit_rows SET at = at + interval '1 hour' WHERE index = 1")]
    [InlineData("DELETE FROM qc.audit_rows WHERE index = 0")]
    [InlineData("DELETE FROM qc.audit_rows WHERE index = 1")]
    [InlineData("DELETE FROM qc.audit_rows")]
    [InlineData("UPDATE qc.merkle_nodes SET hash = sha256(hash) WHERE level = 1")]
    [InlineData("DELETE FROM qc.merkle_nodes WHERE level = 1")]
    [InlineData("UPDATE qc.tree_heads SET root_hash = sha256(root_hash)")]
    [InlineData("UPDATE qc.tree_heads SET signed_text = replace(signed_text, 'site', 'Site')")]
    [InlineData("DELETE FROM qc.audit_rows WHERE index = 1; DELETE FROM qc.merkle_nodes WHERE level = 1 OR index = 1")]
    public async Task A_change_of_the_log_is_found(string attack)
    {
        (string owner, _) = await database.NewDatabaseAsync();
        await FillAsync(owner);
        await AppendAsync(owner, "later");
        await SignHeadAsync(owner);
        Assert.Empty((await CheckAsync(owner)).Findings);
        Assert.NotEmpty(await FindingsAfterAsync(owner, attack));
    }

    [Fact]
    public async Task A_log_rewritten_as_a_whole_with_its_tree_is_found_by_a_head_signed_before()
    {
        (string owner, _) = await database.NewDatabaseAsync();
        await AppendAsync(owner, "released");
        await AppendAsync(owner, "rejected");
        (string oldText, string oldSignature) = await SignHeadAsync(owner);
        await DatabaseFixture.Execute(owner, Disarm + "DELETE FROM qc.audit_rows; DELETE FROM qc.merkle_nodes;");
        await AppendAsync(owner, "released");
        await AppendAsync(owner, "released");
        Assert.Contains((await CheckAsync(owner)).Findings, f => f.Contains("rewritten", StringComparison.Ordinal));

        // Without the old head in the database nothing there contradicts; only the head that was kept elsewhere does.
        await DatabaseFixture.Execute(owner, "DELETE FROM qc.tree_heads");
        Assert.Empty((await CheckAsync(owner)).Findings);
        (string text, string signature) = await SignHeadAsync(owner);
        byte[] export = await ExportAsync(owner, text, signature);
        Assert.True(AuditExport.Verify(export, _key).IsValid);
        Verification against = AuditExport.VerifyAgainst(export, oldText, oldSignature, _key);
        Assert.False(against.IsValid, against.Message);
        Assert.True(AuditExport.VerifyAgainst(export, text, signature, _key).IsValid);
    }

    /// <summary>Every table has a row; the sample's head is not signed and goes.</summary>
    private static async Task FillAsync(string owner)
    {
        await Sample.FillEveryTableAsync(owner);
        await DatabaseFixture.Execute(owner, "ALTER TABLE qc.tree_heads DISABLE TRIGGER ALL; DELETE FROM qc.tree_heads");
    }

    private async Task<StoreCheckResult> CheckAsync(string connection)
    {
        await using QcDbContext context = DatabaseFixture.Context(connection);
        return await context.CheckStoreAsync(_key);
    }

    /// <summary>Findings after an attack, which is then undone.</summary>
    private async Task<IReadOnlyList<string>> FindingsAfterAsync(string owner, string attack)
    {
        await using QcDbContext context = DatabaseFixture.Context(owner);
        await using var transaction = await context.Database.BeginTransactionAsync();
        await context.Database.ExecuteSqlRawAsync((Disarm + attack + "; DROP TABLE IF EXISTS copy").Replace("{", "{{", StringComparison.Ordinal).Replace("}", "}}", StringComparison.Ordinal));
        return (await context.CheckStoreAsync(_key)).Findings;
    }

    private async Task<(string Text, string Signature)> SignHeadAsync(string connection)
    {
        await using QcDbContext context = DatabaseFixture.Context(connection);
        long size = await context.AuditSizeAsync();
        var head = new TreeHead("site", size, MerkleTree.Root(size, context.NodeReader()), await context.DatabaseTimeAsync());
        context.TreeHeads.Add(new TreeHeadRow { Size = size, At = head.At, RootHash = head.Root, SignedText = head.Text, Signature = head.Sign(_key) });
        await context.SaveChangesAsync();
        return (head.Text, head.Sign(_key));
    }

    private static async Task<byte[]> ExportAsync(string connection, string text, string signature)
    {
        await using QcDbContext context = DatabaseFixture.Context(connection);
        return AuditExport.Write(await context.AuditRows.OrderBy(r => r.Index).Select(r => r.CanonicalJson).ToListAsync(), text, signature);
    }

    private static async Task AppendAsync(string connection, string what)
    {
        await using QcDbContext context = DatabaseFixture.Context(connection);
        await using var transaction = await context.Database.BeginTransactionAsync();
        await context.SaveWithAuditAsync([new AuditDraft("person:a", "lot.decided", "lot", "L1", After: new JsonObject { ["decision"] = what })]);
        await transaction.CommitAsync();
    }

    private static async Task<string[]> TablesWithRowsAsync(string owner)
    {
        await using QcDbContext context = DatabaseFixture.Context(owner);
        var tables = new List<string>();
        foreach (string table in context.Model.GetEntityTypes().Where(RecordHash.IsRecord).Select(t => t.GetTableName()!))
        {
            Assert.True(0 < (long)(await DatabaseFixture.Execute(owner, $"SELECT count(*) FROM qc.{table}"))!, $"{table} has no row to attack");
            tables.Add(table);
        }

        return [.. tables];
    }

    /// <summary>An assignment that changes a row without breaking a constraint.</summary>
    private static async Task<string> ChangeableColumnAsync(string owner, string table)
    {
        string column = (string)(await DatabaseFixture.Execute(
            owner,
            $"""
            SELECT column_name FROM information_schema.columns c WHERE table_schema = 'qc' AND table_name = '{table}' AND data_type LIKE 'timestamp%' AND is_nullable = 'NO'
            UNION ALL SELECT 'format' WHERE '{table}' = 'lot_spectra' UNION ALL SELECT 'first_ppm' WHERE '{table}' = 'traces' LIMIT 1
            """))!;
        return column switch
        {
            "format" => "format = 'csv'",
            "first_ppm" => "first_ppm = first_ppm + 1e-12",
            _ => $"{column} = {column} + interval '1 microsecond'",
        };
    }

    /// <summary>An assignment that makes the key and every other unique column new.</summary>
    private static async Task<string> KeyAsync(string owner, string table)
    {
        string columns = (string)(await DatabaseFixture.Execute(
            owner,
            $"""
            SELECT string_agg(DISTINCT CASE WHEN format_type(a.atttypid, NULL) = 'text' THEN a.attname || ' = ''invented''' ELSE a.attname || ' = 999' END, ', ')
            FROM pg_index i JOIN pg_attribute a ON a.attrelid = i.indrelid AND a.attnum = ANY (i.indkey)
            WHERE i.indrelid = 'qc.{table}'::regclass AND i.indisunique AND a.attname <> 'kind'
            """))!;
        return columns;
    }
}
