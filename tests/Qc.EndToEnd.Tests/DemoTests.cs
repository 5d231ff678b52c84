using System.Net;
using System.Net.Http.Json;
using System.Text;
using System.Text.Json.Nodes;
using Xunit;

namespace Qc.EndToEnd.Tests;

/// <summary>The demo plant (invented substances and lots) from the first start to a signed certificate, over HTTP.</summary>
[Collection(DemoFixture.Name)]
public class DemoTests(DemoFixture demo)
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
        JsonNode found = await demo.LotAsync(product, lot);
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
        JsonNode lot = await demo.LotAsync("B-2010", "26-0389");
        Assert.Equal("unreadable", (string?)lot["state"]);
        JsonNode error = lot["spectra"]![0]!["error"]!;
        Assert.Equal("XYDATA", (string?)error["label"]);
        Assert.True((int)error["line"]! > 10);
    }

    [Fact]
    public async Task A_bad_shim_asks_for_another_measurement()
    {
        JsonNode lot = await demo.LotAsync("A-1077", "26-0431");
        Assert.True((bool)lot["unsuitable"]!);
        Assert.Contains("measure again", (string?)lot["summary"], StringComparison.Ordinal);
    }

    [Fact]
    public async Task The_released_lot_has_a_certificate_and_its_entry_is_in_the_log()
    {
        JsonNode lot = await demo.LotAsync("A-1042", "26-0411");
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
    public async Task A_first_start_that_was_broken_off_goes_on_where_it_was()
    {
        string folder = Path.Combine(Path.GetTempPath(), $"qc-demo-{Guid.NewGuid():n}");
        await DemoProcess.BreakOffAsync(folder, "of A-1042: checked");
        Assert.False(File.Exists(Path.Combine(folder, "demo.json")));
        using (DemoProcess again = await DemoProcess.StartAsync(folder))
        {
            using HttpClient lims = again.Lims();
            string[] lots = [.. JsonNode.Parse(await lims.GetStringAsync("lots"))!["lots"]!.AsArray().Select(l => $"{l!["product"]} {l["lot"]}")];
            Assert.Equal(lots.Distinct().Count(), lots.Length);
            using HttpClient whole = demo.Service.Lims();
            string[] demoLots = [.. JsonNode.Parse(await whole.GetStringAsync("lots"))!["lots"]!.AsArray().Select(l => $"{l!["product"]} {l["lot"]}")];
            Assert.Empty(lots.Except(demoLots));
            Assert.True(lots.Length >= 12, $"Only {lots.Length} lots were loaded.");
        }

        Directory.Delete(folder, recursive: true);
    }
}
