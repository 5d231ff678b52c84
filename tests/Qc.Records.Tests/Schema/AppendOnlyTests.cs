using Microsoft.EntityFrameworkCore;
using Npgsql;
using Xunit;

namespace Qc.Records.Tests.Schema;

[Collection(DatabaseCollection.Name)]
public class AppendOnlyTests(DatabaseFixture database)
{
    [Fact]
    public async Task Every_record_table_refuses_update_delete_and_truncate_to_the_application_and_to_the_owner()
    {
        (string owner, string application) = await database.NewDatabaseAsync();
        await Sample.FillEveryTableAsync(owner);
        string[] tables = await Tables(owner);
        Assert.True(tables.Length >= 18, $"only {tables.Length} record tables");
        foreach (string table in tables)
        {
            Assert.True(0 < (long)(await DatabaseFixture.Execute(owner, $"SELECT count(*) FROM qc.{table}"))!, $"{table} has no row to try on");
            string column = (string)(await DatabaseFixture.Execute(
                owner, $"SELECT column_name FROM information_schema.columns WHERE table_schema = 'qc' AND table_name = '{table}' AND is_identity = 'NO' LIMIT 1"))!;
            foreach (string change in new[] { $"UPDATE qc.{table} SET {column} = {column}", $"DELETE FROM qc.{table}", $"TRUNCATE qc.{table} CASCADE" })
            {
                await AssertRefused(application, change);
                await AssertRefused(owner, change);
                await AssertRefused(owner, $"SET session_replication_role = replica; {change}");
            }
        }
    }

    [Fact]
    public async Task Every_mapped_table_can_be_read_by_the_application()
    {
        (string owner, string application) = await database.NewDatabaseAsync();
        await Sample.FillEveryTableAsync(owner);
        await using QcDbContext context = DatabaseFixture.Context(application);
        foreach (var type in context.Model.GetEntityTypes().Where(t => t.GetSchema() == "qc"))
        {
            var set = (IQueryable<object>)typeof(DbContext).GetMethod(nameof(DbContext.Set), 1, [])!.MakeGenericMethod(type.ClrType).Invoke(context, [])!;
            Assert.NotEmpty(await set.ToListAsync());
        }
    }

    private static async Task AssertRefused(string connection, string sql)
    {
        PostgresException refused = await Assert.ThrowsAsync<PostgresException>(() => DatabaseFixture.Execute(connection, sql));
        Assert.True(refused.SqlState == PostgresErrorCodes.InsufficientPrivilege, $"{sql}: {refused.Message}");
    }

    private static async Task<string[]> Tables(string owner)
    {
        await using var connection = new NpgsqlConnection(owner);
        await connection.OpenAsync();
        await using var command = new NpgsqlCommand("SELECT tablename FROM pg_tables WHERE schemaname = 'qc' ORDER BY 1", connection);
        await using NpgsqlDataReader reader = await command.ExecuteReaderAsync();
        var tables = new List<string>();
        while (await reader.ReadAsync())
        {
            tables.Add(reader.GetString(0));
        }

        return [.. tables];
    }
}
