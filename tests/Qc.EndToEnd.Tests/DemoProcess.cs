using System.Diagnostics;
using System.Net;
using System.Net.Http.Headers;
using System.Net.Http.Json;
using System.Net.Sockets;
using System.Text.Json.Nodes;

namespace Qc.EndToEnd.Tests;

/// <summary>The service as a process of its own, started as the README says, on a folder of its own.</summary>
public sealed class DemoProcess : IDisposable
{
    private static readonly TimeSpan Limit = TimeSpan.FromMinutes(6);
    private readonly Process _process;

    private DemoProcess(Process process, string url, string folder)
    {
        _process = process;
        Url = url;
        Folder = folder;
    }

    public string Url { get; }

    public string Folder { get; }

    /// <summary>demo.json as the service wrote it.</summary>
    public JsonNode Demo => JsonNode.Parse(File.ReadAllText(Path.Combine(Folder, "demo.json")))!;

    /// <summary>Starts the demo and waits until it is ready.</summary>
    public static async Task<DemoProcess> StartAsync(string folder)
    {
        (Process process, string url, Func<string> output) = Launch(folder);
        using var client = new HttpClient();
        var watch = Stopwatch.StartNew();
        while (watch.Elapsed < Limit && !process.HasExited)
        {
            try
            {
                if ((await client.GetAsync($"{url}/health/ready")).StatusCode == HttpStatusCode.OK)
                {
                    return new DemoProcess(process, url, folder);
                }
            }
            catch (HttpRequestException)
            {
                // Not listening yet.
            }

            await Task.Delay(250);
        }

        process.Kill(entireProcessTree: true);
        throw new InvalidOperationException($"The demo did not become ready:\n{output()}");
    }

    /// <summary>Starts the demo and kills it as a power cut would, once a log line says so.</summary>
    public static async Task BreakOffAsync(string folder, string whenLogged)
    {
        (Process process, _, Func<string> output) = Launch(folder);
        var watch = Stopwatch.StartNew();
        while (!output().Contains(whenLogged, StringComparison.Ordinal) && watch.Elapsed < Limit && !process.HasExited)
        {
            await Task.Delay(50);
        }

        bool reached = output().Contains(whenLogged, StringComparison.Ordinal);
        process.Kill();
        await process.WaitForExitAsync();
        process.Dispose();
        if (!reached)
        {
            throw new InvalidOperationException($"The demo never logged \"{whenLogged}\":\n{output()}");
        }
    }

    private static (Process Process, string Url, Func<string> Output) Launch(string folder)
    {
        string url = $"http://127.0.0.1:{FreePort()}";
        var info = new ProcessStartInfo("dotnet", [ServiceAssembly(), "--demo", "--data", folder, "--urls", url])
        {
            RedirectStandardOutput = true, RedirectStandardError = true, UseShellExecute = false,
        };
        Process process = Process.Start(info)!;
        var output = new System.Text.StringBuilder();
        process.OutputDataReceived += (_, line) => { lock (output) { output.AppendLine(line.Data); } };
        process.ErrorDataReceived += (_, line) => { lock (output) { output.AppendLine(line.Data); } };
        process.BeginOutputReadLine();
        process.BeginErrorReadLine();
        return (process, url, () =>
        {
            lock (output)
            {
                return output.ToString();
            }
        });
    }

    /// <summary>A client that carries the LIMS key.</summary>
    public HttpClient Lims()
    {
        var client = new HttpClient { BaseAddress = new Uri($"{Url}/api/v1/") };
        client.DefaultRequestHeaders.Authorization = new AuthenticationHeaderValue("Bearer", (string)Demo["limsKey"]!);
        return client;
    }

    /// <summary>A client signed in as the first person with a role.</summary>
    public async Task<(HttpClient Client, JsonNode Person)> SignInAsync(string role)
    {
        JsonNode person = Demo["people"]!.AsArray().First(p => p!["roles"]!.AsArray().Any(r => (string?)r == role))!;
        var client = new HttpClient(new HttpClientHandler { CookieContainer = new CookieContainer() }) { BaseAddress = new Uri($"{Url}/api/v1/") };
        HttpResponseMessage answer = await client.PostAsJsonAsync("session", new { user = (string?)person["user"], password = (string?)person["password"] });
        answer.EnsureSuccessStatusCode();
        return (client, person);
    }

    /// <summary>Ends the process as a power cut would.</summary>
    public void Kill()
    {
        _process.Kill();
        _process.WaitForExit();
    }

    public void Dispose()
    {
        if (!_process.HasExited)
        {
            _process.Kill(entireProcessTree: true);
            _process.WaitForExit();
        }

        _process.Dispose();
    }

    private static int FreePort()
    {
        using var listener = new TcpListener(IPAddress.Loopback, 0);
        listener.Start();
        return ((IPEndPoint)listener.LocalEndpoint).Port;
    }

    /// <summary>The service's own output folder, of the configuration that the tests were built in.</summary>
    private static string ServiceAssembly()
    {
        string configuration = AppContext.BaseDirectory.Contains($"{Path.DirectorySeparatorChar}Release{Path.DirectorySeparatorChar}", StringComparison.Ordinal) ? "Release" : "Debug";
        return Path.Combine(Repository.Root, "src", "Qc.Service", "bin", configuration, "net10.0", "Qc.Service.dll");
    }
}
