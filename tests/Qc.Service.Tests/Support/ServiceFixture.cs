using System.Diagnostics;
using System.Net;
using System.Net.Http.Headers;
using System.Net.Http.Json;
using System.Net.Sockets;
using System.Text.Json.Nodes;
using Npgsql;
using Qc.Records.PrivateServer;
using Xunit;

namespace Qc.Service.Tests.Support;

/// <summary>
/// The service as it runs in a laboratory: its own process, real HTTP, a real PostgreSQL, and a person for each role.
/// </summary>
public sealed class ServiceFixture : IAsyncLifetime
{
    public const string Password = "correct horse battery";
    public const string Administrator = "adam";
    public const string Submitter = "sam";
    public const string Reviewer = "rita";
    public const string SecondReviewer = "rob";
    public const string MethodOwner = "mona";
    public const string QualityUnit = "quinn";
    public const string OwnerAndQualityUnit = "olga";
    public const string Auditor = "ada";
    public const long LargestBodyBytes = 8 * 1024 * 1024;

    private readonly string _folder = Path.Combine(Path.GetTempPath(), $"qc-service-{Guid.NewGuid():n}");
    private readonly Dictionary<string, HttpClient> _clients = [];
    private PrivatePostgres? _database;
    private Process? _service;
    private Uri? _address;
    private string _passwordFile = "";

    /// <summary>A key with every scope of a LIMS.</summary>
    public HttpClient Lims { get; private set; } = null!;

    /// <summary>Data folder of the service.</summary>
    public string Folder => _folder;

    /// <summary>Everything the service printed.</summary>
    public string Log { get; private set; } = "";

    public async Task InitializeAsync()
    {
        _database = await PrivatePostgres.StartAsync(_folder);
        Directory.CreateDirectory(_folder);
        _passwordFile = Path.Combine(_folder, "admin-password");
        await File.WriteAllTextAsync(_passwordFile, Password + "\n");
        StartService();
        await WaitUntilReadyAsync();
        await AddPeopleAsync();
        Lims = await KeyAsync("lots:write", "lots:read", "products:read");
    }

    public async Task DisposeAsync()
    {
        foreach (HttpClient client in _clients.Values)
        {
            client.Dispose();
        }

        await KillAsync();
        if (_database is not null)
        {
            await _database.DisposeAsync();
        }

        Directory.Delete(_folder, recursive: true);
    }

    /// <summary>Kills the service without notice.</summary>
    public async Task KillAsync()
    {
        if (_service is { HasExited: false })
        {
            _service.Kill();
            await _service.WaitForExitAsync();
        }

        _service?.Dispose();
        _service = null;
    }

    /// <summary>Starts the service again at the same address on the same data.</summary>
    public async Task StartAgainAsync()
    {
        StartService();
        await WaitUntilReadyAsync();
    }

    /// <summary>A client of nobody.</summary>
    public HttpClient Anonymous() => new(new HttpClientHandler { AllowAutoRedirect = false }) { BaseAddress = _address };

    /// <summary>A client with the session of a person.</summary>
    public async Task<HttpClient> AsAsync(string user)
    {
        if (!_clients.TryGetValue(user, out HttpClient? client))
        {
            client = Anonymous();
            HttpResponseMessage answer = await client.PostAsJsonAsync("/api/v1/session", new { user, password = Password });
            Assert.Equal(HttpStatusCode.OK, answer.StatusCode);
            _clients[user] = client;
        }

        return client;
    }

    /// <summary>A client with a new key.</summary>
    public async Task<HttpClient> KeyAsync(params string[] scopes) => (await NewKeyAsync(null, scopes)).Client;

    /// <summary>A new key, its id, and a client that sends it.</summary>
    public async Task<(string Id, HttpClient Client)> NewKeyAsync(DateTimeOffset? expiresAt, params string[] scopes)
    {
        HttpClient administrator = await AsAsync(Administrator);
        HttpResponseMessage answer = await administrator.PostAsJsonAsync("/api/v1/keys", new { name = "test", scopes, expiresAt });
        JsonNode key = await answer.JsonAsync(HttpStatusCode.Created);
        HttpClient client = Anonymous();
        client.DefaultRequestHeaders.Authorization = new AuthenticationHeaderValue("Bearer", (string)key["key"]!);
        return ((string)key["id"]!, client);
    }

    /// <summary>Rows of all tables of facts. The log is left out: refusals are written there; so are signed heads, which reading keeps.</summary>
    public async Task<long> CountRecordsAsync()
    {
        await using var connection = new NpgsqlConnection(_database!.OwnerConnectionString);
        await connection.OpenAsync();
        var tables = new List<string>();
        await using (var list = new NpgsqlCommand("SELECT tablename FROM pg_tables WHERE schemaname = 'qc' AND tablename NOT IN ('audit_rows', 'merkle_nodes', 'tree_heads')", connection))
        await using (NpgsqlDataReader reader = await list.ExecuteReaderAsync())
        {
            while (await reader.ReadAsync())
            {
                tables.Add(reader.GetString(0));
            }
        }

        Assert.Contains("lots", tables);
        await using var count = new NpgsqlCommand($"SELECT {string.Join(" + ", tables.Select(t => $"(SELECT count(*) FROM qc.{t})"))}", connection);
        return (long)(await count.ExecuteScalarAsync())!;
    }

    /// <summary>Runs SQL as the owner of the database.</summary>
    public async Task<object?> SqlAsync(string sql)
    {
        await using var connection = new NpgsqlConnection(_database!.OwnerConnectionString);
        await connection.OpenAsync();
        await using var command = new NpgsqlCommand(sql, connection);
        return await command.ExecuteScalarAsync();
    }

    private void StartService()
    {
        _address ??= FreeAddress();
        var start = new ProcessStartInfo("dotnet", [Path.Combine(AppContext.BaseDirectory, "Qc.Service.dll"), "--data", _folder, "--urls", _address.ToString()])
        {
            RedirectStandardOutput = true,
            RedirectStandardError = true,
        };
        start.Environment["ConnectionStrings__Owner"] = _database!.OwnerConnectionString;
        start.Environment["ConnectionStrings__Application"] = _database.ApplicationConnectionString;
        start.Environment["QC_ADMIN_USER"] = Administrator;
        start.Environment["QC_ADMIN_PASSWORD_FILE"] = _passwordFile;
        start.Environment["Qc__LargestBodyBytes"] = LargestBodyBytes.ToString(System.Globalization.CultureInfo.InvariantCulture);
        start.Environment["Qc__CallbacksToThisHost"] = "true";
        start.Environment["Qc__CertificateRetrySeconds"] = "1";
        _service = Process.Start(start)!;
        _service.OutputDataReceived += Keep;
        _service.ErrorDataReceived += Keep;
        _service.BeginOutputReadLine();
        _service.BeginErrorReadLine();
    }

    private static Uri FreeAddress()
    {
        using var listener = new TcpListener(IPAddress.Loopback, 0);
        listener.Start();
        return new Uri($"http://127.0.0.1:{((IPEndPoint)listener.LocalEndpoint).Port}");
    }

    private void Keep(object sender, DataReceivedEventArgs line) => Log += line.Data + "\n";

    private async Task WaitUntilReadyAsync()
    {
        using HttpClient client = Anonymous();
        var watch = Stopwatch.StartNew();
        while (true)
        {
            Assert.False(_service!.HasExited, $"The service stopped while starting.\n{Log}");
            Assert.True(watch.Elapsed < TimeSpan.FromSeconds(120), $"The service is not ready after two minutes.\n{Log}");
            try
            {
                if ((await client.GetAsync("/health/ready")).IsSuccessStatusCode)
                {
                    return;
                }
            }
            catch (HttpRequestException)
            {
                // Not listening yet.
            }

            await Task.Delay(200);
        }
    }

    private async Task AddPeopleAsync()
    {
        HttpClient administrator = await AsAsync(Administrator);
        (string User, string[] Roles)[] people =
        [
            (Submitter, ["submitter"]),
            (Reviewer, ["reviewer"]),
            (SecondReviewer, ["reviewer", "submitter"]),
            (MethodOwner, ["methodOwner"]),
            (QualityUnit, ["qualityUnit"]),
            (OwnerAndQualityUnit, ["methodOwner", "qualityUnit"]),
            (Auditor, ["auditor"]),
        ];
        foreach ((string user, string[] roles) in people)
        {
            HttpResponseMessage answer = await administrator.PostAsJsonAsync(
                "/api/v1/people", new { user, printedName = $"{char.ToUpperInvariant(user[0])}{user[1..]} Example", password = Password, roles });
            await answer.JsonAsync(HttpStatusCode.Created);
        }
    }
}

/// <summary>One service for all tests; they run one after the other.</summary>
[CollectionDefinition(Name)]
public sealed class ServiceCollection : ICollectionFixture<ServiceFixture>
{
    public const string Name = "service";
}
