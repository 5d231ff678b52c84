using System.Diagnostics;
using System.Globalization;
using System.Net;
using System.Net.Sockets;
using System.Security.Cryptography;
using System.Text;
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
    private readonly Process _process;
    private readonly string _programs;
    private readonly string _cluster;
    private readonly int _port;
    private readonly string _ownerPassword;
    private readonly string _applicationPassword;

    private PrivatePostgres(Process process, string programs, string cluster, int port, string ownerPassword, string applicationPassword)
    {
        _process = process;
        _programs = programs;
        _cluster = cluster;
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

    /// <summary>Starts the server on a new or an existing data folder. A server left over from a killed process is stopped first.</summary>
    /// <param name="dataFolder">Where everything is kept.</param>
    /// <param name="logger">Told what happens; may be null.</param>
    /// <param name="packageFolder">The npm package's folder; null to look for it above the program.</param>
    /// <param name="cancellation">Gives up.</param>
    /// <exception cref="PrivatePostgresException">It cannot be started; the message says why.</exception>
    public static async Task<PrivatePostgres> StartAsync(
        string dataFolder, ILogger? logger = null, string? packageFolder = null, CancellationToken cancellation = default)
    {
        string folder = ReachableFolder(Path.GetFullPath(dataFolder), logger);
        Directory.CreateDirectory(folder);
        string programs = PostgresBinaries.CopyTo(folder, packageFolder);
        string cluster = Path.Combine(folder, "cluster");
        string ownerPassword = Password(folder, "owner");
        string applicationPassword = Password(folder, "application");
        if (!File.Exists(Path.Combine(cluster, "PG_VERSION")))
        {
            await InitialiseAsync(programs, folder, cluster, ownerPassword, cancellation);
        }
        else
        {
            await StopLeftOverAsync(programs, cluster, logger, cancellation);
        }

        int port = FreePort();
        Process process = StartServer(programs, cluster, port, Path.Combine(folder, "postgresql.log"));
        var server = new PrivatePostgres(process, programs, cluster, port, ownerPassword, applicationPassword);
        try
        {
            await server.WaitUntilReadyAsync(cancellation);
            await server.PrepareDatabaseAsync(cancellation);
        }
        catch
        {
            await server.DisposeAsync();
            throw;
        }

        logger?.LogInformation("Private PostgreSQL runs on 127.0.0.1:{Port} with its data in {Folder}", port, cluster);
        return server;
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
        NpgsqlConnection.ClearAllPools();
        if (!_process.HasExited)
        {
            await ServerAccount.RunAsync(
                Program(_programs, "pg_ctl"), ["stop", "-D", _cluster, "-m", "fast", "-w", "-t", "20"], CancellationToken.None);
        }

        _process.Dispose();
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

    /// <summary>A folder that the server's account can reach; elsewhere only where root keeps its data under a closed folder.</summary>
    private static string ReachableFolder(string dataFolder, ILogger? logger)
    {
        string wanted = Path.Combine(dataFolder, "postgresql");
        if (OperatingSystem.IsWindows() || !ServerAccount.IsNeeded || ServerAccount.CanReach(wanted))
        {
            return wanted;
        }

        string digest = Convert.ToHexStringLower(SHA256.HashData(Encoding.UTF8.GetBytes(dataFolder)))[..12];
        string instead = Path.Combine("/var/tmp", $"qc-postgresql-{digest}");
        logger?.LogWarning("The account nobody cannot reach {Wanted}; PostgreSQL keeps its data in {Instead}", wanted, instead);
        return instead;
    }

    private static async Task InitialiseAsync(string programs, string folder, string cluster, string ownerPassword, CancellationToken cancellation)
    {
        // The password file is read by initdb's account and removed at once.
        string passwordFile = Path.Combine(folder, "initdb-password");
        Directory.CreateDirectory(cluster);
        await File.WriteAllTextAsync(passwordFile, ownerPassword, cancellation);
        try
        {
            await ServerAccount.GiveAsync(cluster, cancellation);
            await ServerAccount.GiveAsync(passwordFile, cancellation);
            (int exitCode, string output) = await ServerAccount.RunAsync(
                Program(programs, "initdb"),
                ["-D", cluster, "-U", Owner, $"--pwfile={passwordFile}", "-A", "scram-sha-256", "-E", "UTF8", "--locale=C", "--no-instructions"],
                cancellation);
            if (exitCode != 0)
            {
                throw new PrivatePostgresException($"initdb failed in {cluster}: {output}");
            }
        }
        finally
        {
            File.Delete(passwordFile);
        }
    }

    private static async Task StopLeftOverAsync(string programs, string cluster, ILogger? logger, CancellationToken cancellation)
    {
        string pidFile = Path.Combine(cluster, "postmaster.pid");
        if (!File.Exists(pidFile))
        {
            return;
        }

        (int running, _) = await ServerAccount.RunAsync(Program(programs, "pg_ctl"), ["status", "-D", cluster], cancellation);
        if (running == 0)
        {
            logger?.LogWarning("A PostgreSQL server of an earlier run still uses {Cluster}; it is stopped", cluster);
            await ServerAccount.RunAsync(
                Program(programs, "pg_ctl"), ["stop", "-D", cluster, "-m", "fast", "-w", "-t", "30"], cancellation);
        }
    }

    private static Process StartServer(string programs, string cluster, int port, string logFile)
    {
        ProcessStartInfo info = ServerAccount.Start(
            Program(programs, "postgres"),
            "-D", cluster,
            "-c", "listen_addresses=127.0.0.1",
            "-c", $"port={port.ToString(CultureInfo.InvariantCulture)}",
            "-c", "unix_socket_directories=",
            "-c", "max_connections=200",
            "-c", "timezone=UTC");
        Process process = Process.Start(info) ?? throw new PrivatePostgresException("postgres could not be started.");
        var log = TextWriter.Synchronized(new StreamWriter(logFile, append: true) { AutoFlush = true });
        process.OutputDataReceived += (_, line) => log.WriteLine(line.Data);
        process.ErrorDataReceived += (_, line) => log.WriteLine(line.Data);
        process.BeginOutputReadLine();
        process.BeginErrorReadLine();
        return process;
    }

    private async Task WaitUntilReadyAsync(CancellationToken cancellation)
    {
        var watch = Stopwatch.StartNew();
        while (true)
        {
            if (_process.HasExited)
            {
                throw new PrivatePostgresException($"PostgreSQL stopped while starting; see postgresql.log beside {_cluster}.");
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
        var options = new FileStreamOptions { Mode = FileMode.CreateNew, Access = FileAccess.Write };
        if (!OperatingSystem.IsWindows())
        {
            options.UnixCreateMode = UnixFileMode.UserRead | UnixFileMode.UserWrite;
        }

        using var writer = new StreamWriter(file, options);
        writer.Write(password);
        return password;
    }

    private static int FreePort()
    {
        using var listener = new TcpListener(IPAddress.Loopback, 0);
        listener.Start();
        return ((IPEndPoint)listener.LocalEndpoint).Port;
    }
}
