using System.Text.Json.Nodes;
using Xunit;

namespace Qc.EndToEnd.Tests;

/// <summary>One demo for all tests that look at it.</summary>
[CollectionDefinition(Name)]
public sealed class DemoFixture : IAsyncLifetime, ICollectionFixture<DemoFixture>
{
    public const string Name = "demo";

    private readonly string _folder = Path.Combine(Path.GetTempPath(), $"qc-demo-{Guid.NewGuid():n}");

    public DemoProcess Service { get; private set; } = null!;

    public async Task InitializeAsync() => Service = await DemoProcess.StartAsync(_folder);

    /// <summary>Kills the service and starts it again on the same folder.</summary>
    public async Task RestartAfterKillAsync()
    {
        Service.Kill();
        Service.Dispose();
        Service = await DemoProcess.StartAsync(_folder);
    }

    public Task DisposeAsync()
    {
        Service.Dispose();
        try
        {
            Directory.Delete(_folder, recursive: true);
        }
        catch (IOException)
        {
            // The private database may still be closing its files; the folder is temporary.
        }

        return Task.CompletedTask;
    }

    /// <summary>A lot of the demo as the LIMS reads it.</summary>
    public async Task<JsonNode> LotAsync(string product, string number)
    {
        using HttpClient lims = Service.Lims();
        JsonNode list = JsonNode.Parse(await lims.GetStringAsync($"lots?product={product}"))!;
        JsonNode item = list["lots"]!.AsArray().Single(l => (string?)l!["lot"] == number)!;
        return JsonNode.Parse(await lims.GetStringAsync($"lots/{item["id"]}"))!;
    }
}
