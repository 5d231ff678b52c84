using System.Net;
using System.Net.Http.Json;
using System.Text;
using System.Text.Json.Nodes;
using Microsoft.Playwright;
using Xunit;

namespace Qc.EndToEnd.Tests;

/// <summary>One demo for all tests of this class.</summary>
public sealed class DemoFixture : IAsyncLifetime
{
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
}

/// <summary>The demo plant (invented substances and lots) from the first start to a signed certificate, over HTTP and in the browser.</summary>
public class DemoTests(DemoFixture demo) : IClassFixture<DemoFixture>
{
    [Fact]
    public async Task Every_role_is_there_and_can_sign_in()
    {
        foreach (string role in new[] { "submitter", "reviewer", "methodOwner", "qualityUnit", "auditor", "administrator" })
        {
            (HttpClient client, JsonNode person) = await demo.Service.SignInAsync(role);
            using (client)
            {
                JsonNode who = JsonNode.Parse(await client.GetStringAsync("session"))!;
                Assert.Equal((string?)person["user"], (string?)who["user"]);
            }
        }
    }

    [Theory]
    [InlineData("A-1042", "26-0411", "pass", null)]
    [InlineData("A-1051", "26-0402", "pass", null)]
    [InlineData("B-2010", "26-0388", "pass", null)]
    [InlineData("B-2017", "26-0377", "pass", null)]
    [InlineData("D-4001", "26-0350", "pass", null)]
    [InlineData("A-1042", "26-0417", "flag", "identity.")] // isopropyl acetate in place of propyl acetate
    [InlineData("C-3020", "26-0370", "flag", "identity.")] // fumarate in place of maleate
    [InlineData("A-1077", "26-0430", "flag", "impurity.")] // ethyl acetate in butyl acetate
    [InlineData("A-1077", "26-0431", "flag", "suitability.lineWidth")] // bad shim
    [InlineData("C-3003", "26-0395", "flag", "suitability.signalToNoise")] // too dilute
    public async Task Each_lot_gets_the_verdict_that_its_contents_deserve(string product, string lot, string verdict, string? flagged)
    {
        JsonNode found = await LotAsync(product, lot);
        Assert.Equal(verdict, (string?)found["verdict"]);
        if (flagged is not null)
        {
            Assert.Contains(
                found["findings"]!.AsArray(),
                f => (string?)f!["outcome"] == "flag" && ((string?)f["criterion"])!.StartsWith(flagged, StringComparison.Ordinal));
        }
    }

    [Fact]
    public async Task A_broken_file_is_unreadable_with_its_line_and_label()
    {
        JsonNode lot = await LotAsync("B-2010", "26-0389");
        Assert.Equal("unreadable", (string?)lot["state"]);
        JsonNode error = lot["spectra"]![0]!["error"]!;
        Assert.Equal("XYDATA", (string?)error["label"]);
        Assert.True((int)error["line"]! > 10);
    }

    [Fact]
    public async Task A_bad_shim_asks_for_another_measurement()
    {
        JsonNode lot = await LotAsync("A-1077", "26-0431");
        Assert.True((bool)lot["unsuitable"]!);
        Assert.Contains("measure again", (string?)lot["summary"], StringComparison.Ordinal);
    }

    [Fact]
    public async Task The_released_lot_has_a_certificate_and_its_entry_is_in_the_log()
    {
        JsonNode lot = await LotAsync("A-1042", "26-0411");
        Assert.Equal("released", (string?)lot["state"]);
        using HttpClient lims = demo.Service.Lims();
        byte[] pdf = await lims.GetByteArrayAsync($"lots/{lot["id"]}/certificate");
        Assert.Equal("%PDF", Encoding.ASCII.GetString(pdf, 0, 4));
        (HttpClient auditor, _) = await demo.Service.SignInAsync("auditor");
        using (auditor)
        {
            JsonNode entries = JsonNode.Parse(await auditor.GetStringAsync($"audit?subject=lot:{lot["id"]}"))!;
            string[] actions = [.. entries["entries"]!.AsArray().Select(e => (string)e!["entry"]!["action"]!)];
            Assert.Contains("lot.submitted", actions);
            Assert.Contains("certificate.issued", actions);
        }
    }

    [Fact]
    public async Task A_killed_service_keeps_its_records_and_loads_the_demo_only_once()
    {
        using (HttpClient before = demo.Service.Lims())
        {
            int count = await CountAsync(before);
            await demo.RestartAfterKillAsync();
            using HttpClient after = demo.Service.Lims();
            Assert.Equal(count, await CountAsync(after));
        }

        static async Task<int> CountAsync(HttpClient client) => JsonNode.Parse(await client.GetStringAsync("lots"))!["lots"]!.AsArray().Count;
    }

    [Fact]
    public async Task A_reviewer_signs_in_opens_a_flagged_lot_and_decides_on_the_page()
    {
        JsonNode lot = await LotAsync("C-3020", "26-0370");
        JsonNode reviewer = demo.Service.Demo["people"]!.AsArray().First(p => p!["roles"]!.AsArray().Any(r => (string?)r == "reviewer"))!;
        using IPlaywright playwright = await Playwright.CreateAsync();
        await using IBrowser browser = await playwright.Chromium.LaunchAsync(new BrowserTypeLaunchOptions
        {
            ExecutablePath = Environment.GetEnvironmentVariable("QC_CHROMIUM") ?? "/usr/bin/chromium",
            Args = ["--no-sandbox", "--disable-gpu", "--disable-background-networking", "--disable-component-update", "--disable-sync", "--no-first-run"],
        });
        IPage page = await browser.NewPageAsync();
        await page.GotoAsync($"{demo.Service.Url}/sign-in");
        await page.FillAsync("input[name=user]", (string)reviewer["user"]!);
        await page.FillAsync("input[name=password]", (string)reviewer["password"]!);
        await page.Keyboard.PressAsync("Enter");
        await page.WaitForURLAsync("**/waiting**");
        await page.GotoAsync($"{demo.Service.Url}/lots/{lot["id"]}");
        string text = await page.InnerTextAsync("main");
        Assert.Contains("26-0370", text, StringComparison.Ordinal);
        Assert.Contains("dimethyl fumarate", text, StringComparison.Ordinal);
    }

    private async Task<JsonNode> LotAsync(string product, string number)
    {
        using HttpClient lims = demo.Service.Lims();
        JsonNode list = JsonNode.Parse(await lims.GetStringAsync($"lots?product={product}"))!;
        JsonNode item = list["lots"]!.AsArray().Single(l => (string?)l!["lot"] == number)!;
        return JsonNode.Parse(await lims.GetStringAsync($"lots/{item["id"]}"))!;
    }
}
