using System.Diagnostics;
using System.Globalization;
using System.Net;
using System.Net.Sockets;
using System.Security.Cryptography;
using Microsoft.Extensions.Logging;
using Npgsql;

namespace Qc.Records.PrivateServer;

/// <summary>
/// A PostgreSQL server of the service's own, for a laptop, a demo and the tests: real PostgreSQL, its data below a folder,
/// on a free loopback port, with passwords kept in files that only this account reads. A configured connection string
/// replaces it in production.
/// </summary>
public sealed class PrivatePostgres : IAsyncDisposable
{
    private const string Owner = "qc_owner";
    private const string Application = "qc_app";
    private const string DatabaseName = "qc";
    private static readonly TimeSpan StartLimit = TimeSpan.FromSeconds(60);
    private readonly ServerProcess _process;
    private readonly ServerFolder _folder;
    private readonly string _programs;
    private readonly int _port;
    private readonly string _ownerPassword;
    private readonly string _applicationPassword;
    private int _disposed;

    private PrivatePostgres(
        ServerProcess process, ServerFolder folder, string programs, int port, string ownerPassword, string applicationPassword)
    {
        _process = process;
        _folder = folder;
        _programs = programs;
        _port = port;
        _ownerPassword = ownerPassword;
        _applicationPassword = applicationPassword;
    }

    /// <summary>Connection of the owner: migrations only.</summary>
    public string OwnerConnectionString => ConnectionString(Owner, _ownerPassword, DatabaseName);

    /// <summary>Connection of the application: may insert and read records, not change them.</summary>
    public string ApplicationConnectionString => ConnectionString(Application, _applicationPassword, DatabaseName);

    /// <summary>Process id of the server, for tests that kill it.</summary>
    public int ProcessId => _process.Id;

    /// <summary>Starts the server on a new or an existing data folder. A server left over from a killed process is stopped first.
    /// Only one process may use a data folder at a time.</summary>
    /// <param name="dataFolder">Where everything is kept.</param>
    /// <param name="logger">Told what happens; may be null.</param>
    /// <param name="packageFolder">The npm package's folder; null to look for it above the program.</param>
    /// <param name="cancellation">Gives up.</param>
    /// <exception cref="PrivatePostgresException">It cannot be started; the message says why.</exception>
    public static async Task<PrivatePostgres> StartAsync(
        string dataFolder, ILogger? logger = null, string? packageFolder = null, CancellationToken cancellation = default)
    {
        string root = Path.GetFullPath(dataFolder);
        ServerFolder folder = ServerFolder.Take(root, logger);
        try
        {
            string programs = PostgresBinaries.CopyTo(folder.Path, packageFolder);
            string ownerPassword = Password(folder.Path, "owner");
            string applicationPassword = Password(folder.Path, "application");
            if (File.Exists(Path.Combine(folder.Cluster, "PG_VERSION")))
            {
                await LeftOverServer.StopAsync(Program(programs, "pg_ctl"), folder.Cluster, logger, cancellation);
            }
            else
            {
                await InitialiseAsync(programs, folder, ownerPassword, cancellation);
            }

            string logFile = Path.Combine(Directory.CreateDirectory(Path.Combine(root, "logs")).FullName, "postgresql.log");
            int port = FreePort();
            ServerProcess process = await StartServerAsync(programs, folder.Cluster, port, logFile);
            var server = new PrivatePostgres(process, folder, programs, port, ownerPassword, applicationPassword);
            await server.MakeReadyAsync(logFile, cancellation);
            logger?.LogInformation("Private PostgreSQL runs on 127.0.0.1:{Port} with its data in {Folder}", port, folder.Cluster);
            return server;
        }
        catch
        {
            folder.Dispose();
            throw;
        }
    }

    /// <summary>Creates an empty database with the same roles, for a test; returns the owner's and the application's connection.</summary>
    public async Task<(string Owner, string Application)> CreateDatabaseAsync(string name, CancellationToken cancellation = default)
    {
        if (!name.All(c => char.IsAsciiLetterOrDigit(c) || c == '_'))
        {
            throw new ArgumentException("A database name has letters, digits and underscores only.", nameof(name));
        }

        await ExecuteAsync("postgres", $"CREATE DATABASE \"{name}\"", cancellation);
        return (ConnectionString(Owner, _ownerPassword, name), ConnectionString(Application, _applicationPassword, name));
    }

    /// <summary>Stops the server: open transactions are rolled back, nothing committed is lost.</summary>
    public async ValueTask DisposeAsync()
    {
        if (Interlocked.Exchange(ref _disposed, 1) == 1)
        {
            return;
        }

        foreach (string connection in new[] { OwnerConnectionString, ApplicationConnectionString })
        {
            await using var pool = new NpgsqlConnection(connection);
            NpgsqlConnection.ClearPool(pool);
        }

        if (!_process.HasExited)
        {
            (int exitCode, _) = await ServerAccount.RunAsync(
                Program(_programs, "pg_ctl"), ["stop", "-D", _folder.Cluster, "-m", "fast", "-w", "-t", "20"], CancellationToken.None);
            if (exitCode != 0 && !_process.HasExited)
            {
                _process.Kill();
            }
        }

        await LeftOverServer.EndBackendsAsync(_folder.Cluster, null, CancellationToken.None);
        await _process.WaitForExitAsync(CancellationToken.None);
        _process.Dispose();
        _folder.Dispose();
    }

    private string ConnectionString(string user, string password, string database) => new NpgsqlConnectionStringBuilder
    {
        Host = "127.0.0.1",
        Port = _port,
        Username = user,
        Password = password,
        Database = database,
        IncludeErrorDetail = false,
        MaxPoolSize = 60,
    }.ConnectionString;

    private static async Task InitialiseAsync(string programs, ServerFolder folder, string ownerPassword, CancellationToken cancellation)
    {
        // Made under another name first, so that a cluster that was interrupted while being made is never taken for a whole one.
        string unfinished = folder.Cluster + "-unfinished";
        if (Directory.Exists(unfinished))
        {
            Directory.Delete(unfinished, recursive: true);
        }

        Directory.CreateDirectory(unfinished);
        string passwordFile = Path.Combine(folder.Path, "initdb-password");
        WriteSecret(passwordFile, ownerPassword, FileMode.Create);
        try
        {
            await ServerAccount.GiveAsync(unfinished, cancellation);
            await ServerAccount.GiveAsync(passwordFile, cancellation);
            (int exitCode, string output) = await ServerAccount.RunAsync(
                Program(programs, "initdb"),
                ["-D", unfinished, "-U", Owner, $"--pwfile={passwordFile}", "-A", "scram-sha-256", "-E", "UTF8", "--locale=C", "--no-instructions"],
                cancellation);
            if (exitCode != 0)
            {
                throw new PrivatePostgresException($"initdb failed in {unfinished}: {output}");
            }
        }
        finally
        {
            File.Delete(passwordFile);
        }

        Directory.Move(unfinished, folder.Cluster);
    }

    private static Task<ServerProcess> StartServerAsync(string programs, string cluster, int port, string logFile) =>
        ServerProcess.StartAsync(
            ServerAccount.StartServer(
                Program(programs, "postgres"),
                "-D", cluster,
                "-c", "listen_addresses=127.0.0.1",
                "-c", $"port={port.ToString(CultureInfo.InvariantCulture)}",
                "-c", "unix_socket_directories=",
                "-c", "max_connections=200",
                "-c", "timezone=UTC"),
            logFile);

    private async Task MakeReadyAsync(string logFile, CancellationToken cancellation)
    {
        try
        {
            await WaitUntilReadyAsync(logFile, cancellation);
            await PrepareDatabaseAsync(cancellation);
        }
        catch
        {
            await DisposeAsync();
            throw;
        }
    }

    private async Task WaitUntilReadyAsync(string logFile, CancellationToken cancellation)
    {
        var watch = Stopwatch.StartNew();
        while (true)
        {
            if (_process.HasExited)
            {
                throw new PrivatePostgresException($"PostgreSQL stopped while starting; {logFile} says why.");
            }

            try
            {
                await ExecuteAsync("postgres", "SELECT 1", cancellation);
                return;
            }
            catch (NpgsqlException) when (watch.Elapsed < StartLimit)
            {
                await Task.Delay(50, cancellation);
            }
        }
    }

    private async Task PrepareDatabaseAsync(CancellationToken cancellation)
    {
        if (await ScalarAsync($"SELECT 1 FROM pg_database WHERE datname = '{DatabaseName}'", cancellation) is null)
        {
            await ExecuteAsync("postgres", $"CREATE DATABASE {DatabaseName}", cancellation);
        }

        if (await ScalarAsync($"SELECT 1 FROM pg_roles WHERE rolname = '{Application}'", cancellation) is null)
        {
            await ExecuteAsync("postgres", $"CREATE ROLE {Application} LOGIN PASSWORD '{_applicationPassword}'", cancellation);
        }

        if (await ScalarAsync("SELECT 1 FROM pg_roles WHERE rolname = 'qc_reader'", cancellation) is null)
        {
            await ExecuteAsync("postgres", "CREATE ROLE qc_reader NOLOGIN", cancellation);
        }
    }

    private async Task ExecuteAsync(string database, string sql, CancellationToken cancellation)
    {
        await using var connection = new NpgsqlConnection(ConnectionString(Owner, _ownerPassword, database) + ";Pooling=false");
        await connection.OpenAsync(cancellation);
        await using var command = new NpgsqlCommand(sql, connection);
        await command.ExecuteNonQueryAsync(cancellation);
    }

    private async Task<object?> ScalarAsync(string sql, CancellationToken cancellation)
    {
        await using var connection = new NpgsqlConnection(ConnectionString(Owner, _ownerPassword, "postgres") + ";Pooling=false");
        await connection.OpenAsync(cancellation);
        await using var command = new NpgsqlCommand(sql, connection);
        return await command.ExecuteScalarAsync(cancellation);
    }

    private static string Program(string programs, string name) =>
        Path.Combine(programs, "bin", OperatingSystem.IsWindows() ? name + ".exe" : name);

    /// <summary>A random password, kept in a file that only this account reads.</summary>
    private static string Password(string folder, string role)
    {
        string file = Path.Combine(folder, $"{role}.password");
        if (File.Exists(file))
        {
            return File.ReadAllText(file);
        }

        string password = Convert.ToHexStringLower(RandomNumberGenerator.GetBytes(24));
        WriteSecret(file, password, FileMode.CreateNew);
        return password;
    }

    private static void WriteSecret(string file, string secret, FileMode mode)
    {
        var options = new FileStreamOptions { Mode = mode, Access = FileAccess.Write };
        if (!OperatingSystem.IsWindows())
        {
            options.UnixCreateMode = UnixFileMode.UserRead | UnixFileMode.UserWrite;
        }

        using var writer = new StreamWriter(file, options);
        writer.Write(secret);
    }

    private static int FreePort()
    {
        using var listener = new TcpListener(IPAddress.Loopback, 0);
        listener.Start();
        return ((IPEndPoint)listener.LocalEndpoint).Port;
    }
}
