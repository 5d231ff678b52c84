using System.Diagnostics;
using System.Globalization;
using Microsoft.EntityFrameworkCore;
using Npgsql;
using Qc.Evidence;
using Qc.Records;
using Qc.Records.Audit;
using Qc.Records.People;
using Qc.Records.PrivateServer;
using Qc.Records.Schema;

namespace Qc.Benchmarks;

/// <summary>
/// Facts with their audit entries a second, beside plain inserts of the same rows (fact, entry, tree nodes) without lock,
/// hashes or guards, on one private server in one run. To hold: 500 a second on 2 cores. Then proofs of entries of that log.
/// Run with "-c Release -- audit".
/// </summary>
internal static class AuditRate
{
    private const int Writers = 8;
    private static readonly TimeSpan Duration = TimeSpan.FromSeconds(8);

    public static async Task RunAsync()
    {
        string folder = Path.Combine(Path.GetTempPath(), $"qc-rate-{Guid.NewGuid():n}");
        await using (PrivatePostgres server = await PrivatePostgres.StartAsync(folder))
        {
            await SchemaMigrator.MigrateAsync(server.OwnerConnectionString);
            await Sql(server.OwnerConnectionString, "CREATE SCHEMA plain; CREATE TABLE plain.keys (LIKE qc.lims_keys INCLUDING INDEXES); CREATE TABLE plain.entries (LIKE qc.audit_rows INCLUDING INDEXES); CREATE TABLE plain.nodes (id bigint GENERATED ALWAYS AS IDENTITY PRIMARY KEY, hash bytea)");
            double plain = await Rate(w => PlainAsync(server.OwnerConnectionString, w));
            double audited = await Rate(w => AuditedAsync(server.ApplicationConnectionString, w));
            Print($"fact with audit entry  {audited,8:F0} a second, {Writers} writers");
            Print($"plain insert           {plain,8:F0} a second, same rows");
            Print($"ratio                  {audited / plain,8:F2}");
            await ProofsAsync(server.ApplicationConnectionString);
        }

        Directory.Delete(folder, recursive: true);
    }

    private static async Task<double> Rate(Func<int, Task> write)
    {
        long count = 0;
        var watch = Stopwatch.StartNew();
        await Task.WhenAll(Enumerable.Range(0, Writers).Select(w => Task.Run(async () =>
        {
            while (watch.Elapsed < Duration)
            {
                await write(w);
                Interlocked.Increment(ref count);
            }
        })));
        return count / watch.Elapsed.TotalSeconds;
    }

    private static async Task AuditedAsync(string connection, int writer)
    {
        await using QcDbContext context = Context(connection);
        await using var transaction = await context.Database.BeginTransactionAsync();
        DateTimeOffset now = DateTimeOffset.UnixEpoch;
        var key = new LimsKey { Id = Ids.New(now), Name = "rate", SecretSha256 = "", Scopes = "", CreatedAt = now, CreatedBy = "person:a" };
        context.Add(key);
        await context.SaveWithAuditAsync([new AuditDraft($"person:{writer}", "key.added", "key", key.Id)]);
        await transaction.CommitAsync();
    }

    private static async Task PlainAsync(string connection, int writer)
    {
        await using var open = new NpgsqlConnection(connection);
        await open.OpenAsync();
        await using var transaction = await open.BeginTransactionAsync();
        string id = Ids.New(DateTimeOffset.UnixEpoch);
        await Sql(open, $"INSERT INTO plain.keys VALUES ('{id}', 'rate', '', '', NULL, now(), 'person:a')");
        await Sql(open, $"INSERT INTO plain.entries SELECT nextval('plain.nodes_id_seq'), now(), 'person:{writer}', 'key.added', 'key', '{id}', repeat('x', 300), sha256('x'), '1'");
        await Sql(open, "INSERT INTO plain.nodes (hash) VALUES (sha256('x')), (sha256('y'))");
        await transaction.CommitAsync();
    }

    private static async Task ProofsAsync(string connection)
    {
        await using QcDbContext context = Context(connection);
        long size = await context.AuditSizeAsync();
        var watch = Stopwatch.StartNew();
        const int Proofs = 200;
        for (int i = 0; i < Proofs; i++)
        {
            MerkleTree.InclusionProof(i * size / Proofs, size, context.NodeReader());
        }

        Print($"inclusion proof        {watch.Elapsed.TotalMilliseconds / Proofs,8:F2} ms each, of {size} entries");
    }

    private static QcDbContext Context(string connection)
    {
        var builder = new DbContextOptionsBuilder<QcDbContext>();
        QcDbContext.Configure(builder, connection);
        return new QcDbContext(builder.Options);
    }

    private static async Task Sql(string connection, string sql)
    {
        await using var open = new NpgsqlConnection(connection);
        await open.OpenAsync();
        await Sql(open, sql);
    }

    private static async Task Sql(NpgsqlConnection open, string sql)
    {
        await using var command = new NpgsqlCommand(sql, open);
        await command.ExecuteNonQueryAsync();
    }

    private static void Print(FormattableString line) => Console.WriteLine(line.ToString(CultureInfo.InvariantCulture));
}
