using System.Diagnostics;
using Npgsql;
using Qc.Records.PrivateServer;
using Xunit;

namespace Qc.Records.Tests;

public class PrivatePostgresTests
{
    [Fact]
    public async Task The_server_starts_survives_being_killed_and_keeps_its_data()
    {
        string folder = Path.Combine(Path.GetTempPath(), $"qc-test-{Guid.NewGuid():n}");
        try
        {
            await using (PrivatePostgres first = await PrivatePostgres.StartAsync(folder))
            {
                await Execute(first.OwnerConnectionString, "CREATE TABLE kept (n int); INSERT INTO kept VALUES (42)");
                using Process server = Process.GetProcessById(first.ProcessId);
                server.Kill();
                await server.WaitForExitAsync();
            }

            await using PrivatePostgres second = await PrivatePostgres.StartAsync(folder);
            Assert.Equal(42, await Execute(second.OwnerConnectionString, "SELECT n FROM kept"));
            await Assert.ThrowsAsync<PostgresException>(() => Execute(second.ApplicationConnectionString, "SELECT n FROM kept"));
        }
        finally
        {
            Directory.Delete(folder, recursive: true);
        }
    }

    private static async Task<object?> Execute(string connectionString, string sql)
    {
        await using var connection = new NpgsqlConnection(connectionString);
        await connection.OpenAsync();
        await using var command = new NpgsqlCommand(sql, connection);
        return await command.ExecuteScalarAsync();
    }
}
