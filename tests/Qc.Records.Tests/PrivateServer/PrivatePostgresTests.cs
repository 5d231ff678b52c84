using System.Diagnostics;
using Npgsql;
using Qc.Records.PrivateServer;
using Xunit;

namespace Qc.Records.Tests.PrivateServer;

/// <summary>One data folder for these tests: a server on it is started and stopped by each.</summary>
public sealed class DataFolder : IDisposable
{
    public string Path { get; } = System.IO.Path.Combine(System.IO.Path.GetTempPath(), $"qc-test-{Guid.NewGuid():n}");

    public void Dispose()
    {
        if (Directory.Exists(Path))
        {
            Directory.Delete(Path, recursive: true);
        }
    }
}

public class PrivatePostgresTests(DataFolder shared) : IClassFixture<DataFolder>
{
    private readonly string _folder = shared.Path;

    [Fact]
    public async Task The_server_starts_survives_being_killed_in_the_middle_of_a_query_and_keeps_its_data()
    {
        await using (PrivatePostgres first = await PrivatePostgres.StartAsync(_folder))
        {
            await Execute(first.OwnerConnectionString, "CREATE TABLE kept (n int); INSERT INTO kept VALUES (42)");
            Task<object?> busy = Execute(first.OwnerConnectionString, "SELECT count(*) FROM generate_series(1, 2000000000) g");
            await WaitForBusyAsync(first.OwnerConnectionString);
            using Process server = Process.GetProcessById(first.ProcessId);
            server.Kill();
            await server.WaitForExitAsync();
            await first.DisposeAsync();
            await Assert.ThrowsAnyAsync<NpgsqlException>(() => busy);
        }

        await using PrivatePostgres second = await PrivatePostgres.StartAsync(_folder);
        Assert.Equal(42, await Execute(second.OwnerConnectionString, "SELECT n FROM kept"));
        PostgresException refused = await Assert.ThrowsAsync<PostgresException>(
            () => Execute(second.ApplicationConnectionString, "SELECT n FROM kept"));
        Assert.Equal(PostgresErrorCodes.InsufficientPrivilege, refused.SqlState);
    }

    [Fact]
    public async Task A_data_folder_in_use_is_refused_to_a_second_service_and_free_again_after_the_first()
    {
        await using (await PrivatePostgres.StartAsync(_folder))
        {
            PrivatePostgresException refused = await Assert.ThrowsAsync<PrivatePostgresException>(() => PrivatePostgres.StartAsync(_folder));
            Assert.Contains("already runs", refused.Message, StringComparison.Ordinal);
        }

        await using PrivatePostgres next = await PrivatePostgres.StartAsync(_folder);
        Assert.Equal(1, await Execute(next.OwnerConnectionString, "SELECT 1"));
    }

    [Fact]
    public async Task A_process_id_file_that_names_another_program_stops_neither_that_program_nor_the_start()
    {
        string cluster;
        await using (PrivatePostgres first = await PrivatePostgres.StartAsync(_folder))
        {
            cluster = (string)(await Execute(first.OwnerConnectionString, "SHOW data_directory"))!;
        }

        using Process stranger = Process.Start("sleep", "60");
        await File.WriteAllTextAsync(Path.Combine(cluster, "postmaster.pid"), $"{stranger.Id}\n{cluster}\n0\n1\n\n\n");
        try
        {
            await using PrivatePostgres second = await PrivatePostgres.StartAsync(_folder);
            Assert.Equal(1, await Execute(second.OwnerConnectionString, "SELECT 1"));
            Assert.False(stranger.HasExited);
        }
        finally
        {
            stranger.Kill();
        }
    }

    [Fact]
    public async Task A_cluster_that_was_interrupted_while_being_made_is_made_anew()
    {
        using var fresh = new DataFolder();
        string unfinished = Path.Combine(fresh.Path, "postgresql", "cluster-unfinished");
        Directory.CreateDirectory(unfinished);
        await File.WriteAllTextAsync(Path.Combine(unfinished, "PG_VERSION"), "18\n");
        await using PrivatePostgres server = await PrivatePostgres.StartAsync(fresh.Path);
        Assert.Equal(1, await Execute(server.OwnerConnectionString, "SELECT 1"));
    }

    private static async Task WaitForBusyAsync(string connectionString)
    {
        const string sql = "SELECT count(*) FROM pg_stat_activity WHERE state = 'active' AND query LIKE '%generate_series%' AND pid <> pg_backend_pid()";
        while ((long)(await Execute(connectionString, sql))! == 0)
        {
            await Task.Delay(20);
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
