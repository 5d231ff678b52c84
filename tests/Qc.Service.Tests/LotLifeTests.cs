using System.Net;
using System.Net.Http.Headers;
using System.Net.Http.Json;
using System.Security.Cryptography;
using System.Text;
using System.Text.Json.Nodes;
using Qc.Evidence;
using Qc.Service.Tests.Support;
using Xunit;

namespace Qc.Service.Tests;

/// <summary>A lot from submission to certificate and proof.</summary>
[Collection(ServiceCollection.Name)]
public sealed class LotLifeTests(ServiceFixture service)
{
    [Fact]
    public async Task A_product_is_answered_with_its_structure_and_expected_signals()
    {
        HttpClient owner = await service.AsAsync(ServiceFixture.MethodOwner);
        string code = Plant.Unique("P");
        HttpResponseMessage answer = await owner.PostAsJsonAsync(
            "/api/v1/products", new { code, name = "ethyl acetate", structure = new { smiles = "O=C(C)OCC" }, solvent = "CDCl3", nucleus = "1H" });
        JsonNode product = await answer.JsonAsync(HttpStatusCode.Created);
        Assert.Equal($"/api/v1/products/{code}", answer.Headers.Location!.ToString());
        Assert.Equal("CCOC(C)=O", (string?)product["smiles"]);
        Assert.Equal("XEKOWRVHYACXOJ-UHFFFAOYSA-N", (string?)product["inchiKey"]);
        Assert.Equal("C4H8O2", (string?)product["formula"]);
        Assert.Equal(88.1, (double)product["molarMassGramPerMol"]!, 1);
        JsonArray groups = product["protonGroups"]!.AsArray();
        Assert.Equal([3, 2, 3], groups.Select(g => (int)g!["count"]!));
        Assert.All(groups, g => Assert.True((double)g!["expectedStandardUncertaintyPpm"]! > 0));
    }

    [Fact]
    public async Task An_empty_specification_is_complete_and_states_its_defaults()
    {
        string code = await Plant.ProductAsync(service);
        JsonNode product = await (await service.Lims.GetAsync($"/api/v1/products/{code}")).JsonAsync();
        JsonNode specification = product["specification"]!;
        Assert.Equal(1, (int)specification["version"]!);
        Assert.Equal("approved", (string?)specification["state"]);
        Assert.Equal(0.15, (double)specification["criteria"]!["identity"]!["shiftToleranceMinimumPpm"]!);
        Assert.Equal(50, (double)specification["criteria"]!["suitability"]!["signalToNoise"]!);
    }

    [Fact]
    public async Task A_flagged_lot_is_reviewed_released_certified_and_proven()
    {
        string product = await Plant.ProductAsync(service, "propyl acetate", "CCCOC(C)=O");
        JsonNode lot = await Plant.CheckedLotAsync(service, product, "isopropyl acetate");
        string id = (string)lot["id"]!;
        Assert.Equal("checked", (string?)lot["state"]);
        Assert.Equal("flag", (string?)lot["verdict"]);
        Assert.Equal(1, (int)lot["specificationVersion"]!);
        Assert.Contains(lot["findings"]!.AsArray(), f => (string?)f!["outcome"] == "flag");

        HttpClient reviewer = await service.AsAsync(ServiceFixture.Reviewer);
        await (await reviewer.GetAsync($"/api/v1/lots/{id}/certificate")).ProblemAsync(409, "no-certificate");
        JsonNode reviewed = await (await Review(reviewer, id, "release", "Known mix of isomers, agreed with the customer.")).JsonAsync(HttpStatusCode.Created);
        Assert.Equal("released", (string?)reviewed["state"]);
        Assert.Equal("Rita Example", (string?)reviewed["reviews"]![0]!["printedName"]);

        HttpResponseMessage pdf = await service.Lims.GetAsync($"/api/v1/lots/{id}/certificate");
        Assert.Equal("application/pdf", pdf.Content.Headers.ContentType!.MediaType);
        Assert.StartsWith("%PDF-", Encoding.ASCII.GetString((await pdf.Content.ReadAsByteArrayAsync())[..5]), StringComparison.Ordinal);
        JsonNode certificate = await (await GetAsync(service.Lims, $"/api/v1/lots/{id}/certificate", "application/json")).JsonAsync();
        Assert.Equal(id, (string?)certificate["lot"]!["id"]);
        Assert.Equal("flag", (string?)certificate["verdict"]);

        await AssertProvenAsync(id, ["lot.submitted", "lot.checking", "lot.checked", "lot.release", "certificate.intended", "certificate.issued"]);
    }

    [Fact]
    public async Task A_passed_lot_goes_without_a_reviewer_where_its_specification_says_so()
    {
        string product = await Plant.ProductAsync(service, specification: new { releaseByException = true });
        JsonNode lot = await Plant.CheckedLotAsync(service, product, "ethyl acetate");
        Assert.Equal("pass", (string?)lot["verdict"]);
        Assert.Equal("released", (string?)lot["state"]);
        Assert.Equal(HttpStatusCode.OK, (await service.Lims.GetAsync($"/api/v1/lots/{(string?)lot["id"]}/certificate")).StatusCode);
    }

    [Fact]
    public async Task A_passed_lot_waits_for_a_reviewer_where_its_specification_does_not_say_so()
    {
        string product = await Plant.ProductAsync(service);
        JsonNode lot = await Plant.CheckedLotAsync(service, product, "ethyl acetate");
        Assert.Equal("pass", (string?)lot["verdict"]);
        Assert.Equal("checked", (string?)lot["state"]);
        await (await service.Lims.GetAsync($"/api/v1/lots/{(string?)lot["id"]}/certificate")).ProblemAsync(409, "no-certificate");
    }

    [Fact]
    public async Task An_unreadable_spectrum_gets_no_verdict_and_cannot_be_released()
    {
        string product = await Plant.ProductAsync(service);
        JsonNode lot = await Plant.CheckedLotAsync(service, product);
        Assert.Equal("unreadable", (string?)lot["state"]);
        Assert.Null(lot["verdict"]);
        string id = (string)lot["id"]!;
        HttpClient reviewer = await service.AsAsync(ServiceFixture.Reviewer);
        long before = await service.CountRecordsAsync();
        await (await Review(reviewer, id, "release", "It will be fine.")).ProblemAsync(409, "not-releasable");
        Assert.Equal(before, await service.CountRecordsAsync());
        JsonNode decided = await (await Review(reviewer, id, "remeasure", "The file is damaged.")).JsonAsync(HttpStatusCode.Created);
        Assert.Equal("remeasure", (string?)decided["state"]);
    }

    [Fact]
    public async Task The_bytes_as_received_come_back_unchanged_from_a_form_too()
    {
        string product = await Plant.ProductAsync(service);
        byte[] file = Encoding.UTF8.GetBytes(Plant.Spectrum("ethyl acetate"));
        var lot = new JsonObject
        {
            ["product"] = product,
            ["lot"] = Plant.Unique("L"),
            ["spectra"] = new JsonArray(new JsonObject { ["name"] = "proton", ["format"] = "jcamp-dx" }),
        };
        using var form = new MultipartFormDataContent
        {
            { new StringContent(lot.ToJsonString(), Encoding.UTF8, "application/json"), "lot" },
            { new ByteArrayContent(file), "proton", "run.dx" },
        };
        HttpResponseMessage answer = await service.Lims.PostAsync("/api/v1/lots", form);
        JsonNode accepted = await answer.JsonAsync(HttpStatusCode.Accepted);
        Assert.Equal($"/api/v1/lots/{(string?)accepted["id"]}", answer.Headers.Location!.ToString());

        HttpResponseMessage original = await service.Lims.GetAsync($"{answer.Headers.Location}/spectra/1/original");
        Assert.Equal(file, await original.Content.ReadAsByteArrayAsync());
        Assert.Equal($"\"{Convert.ToHexStringLower(SHA256.HashData(file))}\"", original.Headers.ETag!.Tag);
        Assert.Equal("attachment", original.Content.Headers.ContentDisposition!.DispositionType);
        await (await service.Lims.GetAsync($"{answer.Headers.Location}/spectra/2/original")).ProblemAsync(404, "not-found");
    }

    [Fact]
    public async Task The_trace_keeps_the_highest_point_however_few_points_are_asked_for()
    {
        string product = await Plant.ProductAsync(service);
        string id = (string)(await Plant.CheckedLotAsync(service, product, "ethyl acetate"))["id"]!;
        float[] all = await TraceAsync(id, 100_000);
        float[] few = await TraceAsync(id, 200);
        Assert.True(few.Length < 500 && all.Length > 10_000, $"{few.Length} of {all.Length} points");
        Assert.Equal(all.Max(), few.Max());
        Assert.Equal(all.Min(), few.Min());
    }

    [Fact]
    public async Task A_lot_is_judged_by_the_version_in_force_when_it_was_sampled()
    {
        string product = await Plant.ProductAsync(service);
        DateTimeOffset sampled = DateTimeOffset.Parse((string)(await service.SqlAsync("SELECT to_char(now() AT TIME ZONE 'UTC', 'YYYY-MM-DD\"T\"HH24:MI:SS.US\"Z\"')"))!, System.Globalization.CultureInfo.InvariantCulture);
        HttpClient owner = await service.AsAsync(ServiceFixture.MethodOwner);
        await (await owner.PostAsJsonAsync($"/api/v1/products/{product}/specifications", new { })).JsonAsync(HttpStatusCode.Created);
        HttpClient quality = await service.AsAsync(ServiceFixture.QualityUnit);
        await (await quality.PostAsJsonAsync($"/api/v1/products/{product}/specifications/2/approve", new { password = ServiceFixture.Password })).JsonAsync();

        JsonObject old = Plant.Lot(product);
        old["sampledAt"] = sampled.ToOffset(TimeSpan.FromHours(2)).ToString("O", System.Globalization.CultureInfo.InvariantCulture);
        Assert.Equal(1, (int)(await (await Plant.SubmitAsync(service.Lims, old)).JsonAsync())["specificationVersion"]!);
        Assert.Equal(2, (int)(await (await Plant.SubmitAsync(service.Lims, Plant.Lot(product))).JsonAsync())["specificationVersion"]!);
    }

    [Fact]
    public async Task The_list_is_filtered_and_paged_without_gap_or_repetition()
    {
        string product = await Plant.ProductAsync(service);
        var submitted = new List<string>();
        for (int i = 0; i < 3; i++)
        {
            submitted.Add((string)(await Plant.CheckedLotAsync(service, product))["id"]!);
        }

        JsonNode page = await (await service.Lims.GetAsync($"/api/v1/lots?product={product}&state=unreadable")).JsonAsync();
        Assert.Equal(Enumerable.Reverse(submitted), page["lots"]!.AsArray().Select(l => (string)l!["id"]!));
        JsonNode none = await (await service.Lims.GetAsync($"/api/v1/lots?product={product}&verdict=pass")).JsonAsync();
        Assert.Empty(none["lots"]!.AsArray());
        await (await service.Lims.GetAsync("/api/v1/lots?cursor=%20nonsense")).ProblemAsync(400, "malformed");
        await (await service.Lims.GetAsync("/api/v1/lots?from=yesterday")).ProblemAsync(400, "malformed");
    }

    private async Task AssertProvenAsync(string lotId, string[] actions)
    {
        HttpClient auditor = await service.AsAsync(ServiceFixture.Auditor);
        JsonNode page = await (await auditor.GetAsync($"/api/v1/audit?subject={lotId}")).JsonAsync();
        JsonArray entries = page["entries"]!.AsArray();
        Assert.Equal(actions, entries.Select(e => (string)e!["entry"]!["action"]!));
        foreach (JsonNode? entry in entries)
        {
            JsonNode proof = await (await auditor.GetAsync($"/api/v1/audit/entries/{(long)entry!["index"]!}/proof")).JsonAsync();
            byte[] leaf = MerkleTree.LeafHash(CanonicalJson.Of(entry["entry"]!.ToJsonString()));
            byte[][] path = [.. proof["path"]!.AsArray().Select(h => Convert.FromHexString((string)h!))];
            byte[] root = Convert.FromHexString((string)proof["rootHash"]!);
            Assert.True(MerkleTree.VerifyInclusion((long)entry["index"]!, (long)proof["size"]!, leaf, path, root));
            leaf[0] ^= 1;
            Assert.False(MerkleTree.VerifyInclusion((long)entry["index"]!, (long)proof["size"]!, leaf, path, root));
        }
    }

    private async Task<float[]> TraceAsync(string id, int points)
    {
        JsonNode trace = await (await service.Lims.GetAsync($"/api/v1/lots/{id}/spectra/1/trace?points={points}")).JsonAsync();
        return [.. trace["measured"]!.AsArray().Select(v => (float)v!)];
    }

    private static Task<HttpResponseMessage> Review(HttpClient reviewer, string id, string decision, string reason) =>
        reviewer.PostAsJsonAsync($"/api/v1/lots/{id}/reviews", new { decision, reason, password = ServiceFixture.Password });

    private static async Task<HttpResponseMessage> GetAsync(HttpClient client, string address, string accept)
    {
        using var request = new HttpRequestMessage(HttpMethod.Get, address);
        request.Headers.Accept.Add(new MediaTypeWithQualityHeaderValue(accept));
        return await client.SendAsync(request);
    }
}
