using System.IO.Compression;
using System.Net;
using System.Net.Http.Json;
using System.Text.Json.Nodes;
using Xunit;

namespace Qc.EndToEnd.Tests;

/// <summary>
/// A spectrum that nobody here made, posted to the whole service: jcampData/1H_spectrum.jdx of data/generated.zip in the npm
/// package nmredata-data-test (MIT), a measured 400 MHz proton spectrum of ethylbenzene in CDCl3 whose axis is about
/// 0.14 ppm too high.
/// </summary>
[Collection(DemoFixture.Name)]
public class MeasuredLotTests(DemoFixture demo)
{
    [Fact]
    public async Task The_axis_of_the_measured_ethylbenzene_is_noticed_and_the_substance_is_known_all_the_same()
    {
        JsonNode lot = await JudgeAsync("M-1", "ethylbenzene", "CCc1ccccc1");
        JsonNode axis = Finding(lot, "suitability.axisOffset");
        Assert.Equal("flag", (string?)axis["outcome"]);
        Assert.InRange((double)axis["observed"]!, 0.12, 0.17);
        Assert.DoesNotContain(lot["findings"]!.AsArray(), f => IsFlag(f) && ((string)f!["criterion"]!).StartsWith("identity.", StringComparison.Ordinal));

        // Counts of the formula: C6H5 CH2 CH3.
        double[] counts = [.. lot["protons"]!.AsArray().Select(p => (double)p!["observedCount"]!)];
        int[] expected = [.. lot["protons"]!.AsArray().Select(p => (int)p!["expectedCount"]!)];
        Assert.Equal(10, expected.Sum());
        Assert.All(counts.Zip(expected), pair => Assert.InRange(pair.First / pair.Second, 0.85, 1.15));
    }

    [Theory]
    [InlineData("M-2", "o-xylene", "Cc1ccccc1C")]
    [InlineData("M-3", "m-xylene", "Cc1cccc(C)c1")]
    [InlineData("M-4", "p-xylene", "Cc1ccc(C)cc1")]
    public async Task The_same_spectrum_is_flagged_for_each_isomer_of_ethylbenzene(string code, string name, string smiles)
    {
        JsonNode lot = await JudgeAsync(code, name, smiles);
        Assert.Equal("flag", (string?)lot["verdict"]);
        Assert.Contains(lot["findings"]!.AsArray(), f => IsFlag(f) && (string)f!["criterion"]! == "identity.substance");
    }

    private async Task<JsonNode> JudgeAsync(string code, string name, string smiles)
    {
        (HttpClient owner, _) = await demo.Service.SignInAsync("methodOwner");
        (HttpClient quality, JsonNode approver) = await demo.Service.SignInAsync("qualityUnit");
        using (owner)
        using (quality)
        {
            await PostAsync(owner, "products", new { code, name, structure = new { smiles }, solvent = "CDCl3", nucleus = "1H" });
            await PostAsync(owner, $"products/{code}/specifications", new { });
            await PostAsync(quality, $"products/{code}/specifications/1/approve", new { password = (string)approver["password"]! });
        }

        using HttpClient lims = demo.Service.Lims();
        lims.DefaultRequestHeaders.Add("Prefer", "wait=60");
        using HttpResponseMessage answer = await lims.PostAsJsonAsync("lots", new
        {
            product = code,
            lot = "26-0001",
            spectra = new[] { new { name = "proton", format = "jcamp-dx", content = Convert.ToBase64String(Spectrum()), encoding = "base64" } },
        });
        Assert.Equal(HttpStatusCode.OK, answer.StatusCode);
        return JsonNode.Parse(await answer.Content.ReadAsStringAsync())!;
    }

    private static async Task PostAsync(HttpClient client, string path, object body)
    {
        using HttpResponseMessage answer = await client.PostAsJsonAsync(path, body);
        Assert.True(answer.IsSuccessStatusCode, await answer.Content.ReadAsStringAsync());
    }

    private static JsonNode Finding(JsonNode lot, string criterion) =>
        lot["findings"]!.AsArray().Single(f => (string)f!["criterion"]! == criterion)!;

    private static bool IsFlag(JsonNode? finding) => (string?)finding!["outcome"] == "flag";

    private static byte[] Spectrum()
    {
        using var zip = ZipFile.OpenRead(Path.Combine(Repository.Root, "node_modules", "nmredata-data-test", "data", "generated.zip"));
        using Stream stream = zip.GetEntry("jcampData/1H_spectrum.jdx")!.Open();
        using var bytes = new MemoryStream();
        stream.CopyTo(bytes);
        return bytes.ToArray();
    }
}
