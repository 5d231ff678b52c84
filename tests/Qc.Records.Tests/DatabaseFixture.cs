using Microsoft.EntityFrameworkCore;
using Qc.Records.PrivateServer;
using Qc.Records.Schema;
using Testcontainers.PostgreSql;
using Xunit;

namespace Qc.Records.Tests;

/// <summary>A real PostgreSQL for all tests of this assembly: a container where a Docker engine answers, else the private server.</summary>
public sealed class DatabaseFixture : IAsyncLifetime
{
    private readonly string _folder = Path.Combine(Path.GetTempPath(), $"qc-records-{Guid.NewGuid():n}");
    private PrivatePostgres? _private;
    private PostgreSqlContainer? _container;
    private int _databases;

    public async Task InitializeAsync()
    {
        try
        {
            PostgreSqlContainer container = new PostgreSqlBuilder("postgres:18.1").WithUsername("qc_owner").Build();
            await container.StartAsync();
            _container = container;
            await Execute(container.GetConnectionString(), "CREATE ROLE qc_app LOGIN PASSWORD 'test-only'; CREATE ROLE qc_reader NOLOGIN");
        }
        catch (Exception e) when (e is DotNet.Testcontainers.Builders.DockerUnavailableException or ArgumentException or InvalidOperationException)
        {
            _private = await PrivatePostgres.StartAsync(_folder);
        }
    }

    public async Task DisposeAsync()
    {
        if (_container is not null)
        {
            await _container.DisposeAsync();
        }

        if (_private is not null)
        {
            await _private.DisposeAsync();
            Directory.Delete(_folder, recursive: true);
        }
    }

    /// <summary>A fresh, migrated database; connections of its owner and of the application.</summary>
    public async Task<(string Owner, string Application)> NewDatabaseAsync()
    {
        string name = $"test_{Interlocked.Increment(ref _databases)}";
        (string owner, string application) = _private is not null
            ? await _private.CreateDatabaseAsync(name)
            : await ContainerDatabase(name);
        await SchemaMigrator.MigrateAsync(owner);
        return (owner, application);
    }

    public static QcDbContext Context(string connectionString)
    {
        var builder = new DbContextOptionsBuilder<QcDbContext>();
        QcDbContext.Configure(builder, connectionString);
        return new QcDbContext(builder.Options);
    }

    public static async Task<object?> Execute(string connectionString, string sql)
    {
        await using var connection = new Npgsql.NpgsqlConnection(connectionString);
        await connection.OpenAsync();
        await using var command = new Npgsql.NpgsqlCommand(sql, connection);
        return await command.ExecuteScalarAsync();
    }

    private async Task<(string Owner, string Application)> ContainerDatabase(string name)
    {
        string server = _container!.GetConnectionString();
        await Execute(server, $"CREATE DATABASE {name}");
        var owner = new Npgsql.NpgsqlConnectionStringBuilder(server) { Database = name };
        var application = new Npgsql.NpgsqlConnectionStringBuilder(server) { Database = name, Username = "qc_app", Password = "test-only" };
        return (owner.ConnectionString, application.ConnectionString);
    }
}

/// <summary>One server for the assembly.</summary>
[CollectionDefinition(Name)]
public sealed class DatabaseCollection : ICollectionFixture<DatabaseFixture>
{
    public const string Name = "database";
}
