using System.Net;
using System.Net.Http.Json;
using System.Text;
using System.Text.Json.Nodes;
using Qc.Service.Tests.Support;
using Xunit;

namespace Qc.Service.Tests;

/// <summary>Submissions that are refused: each says where and why, and leaves no record.</summary>
[Collection(ServiceCollection.Name)]
public sealed class BadLotTests(ServiceFixture service)
{
    private const string Json = "application/json";

    public static TheoryData<string, string, int, string, string?> Bodies => new()
    {
        { "cut off", """{"product": "A-1", "lot": """, 400, "malformed", null },
        { "no JSON", "hello", 400, "malformed", null },
        { "empty", "", 400, "malformed", null },
        { "null", "null", 400, "malformed", null },
        { "a list", "[]", 400, "malformed", null },
        { "no number", Body("\"sample\": {\"massMg\": NaN}"), 400, "malformed", null },
        { "wrong type", Body("\"sample\": {\"massMg\": \"20\"}"), 422, "invalid-field", "/sample/massMg" },
        { "negative mass", Body("\"sample\": {\"massMg\": -1}"), 422, "invalid-field", "/sample/massMg" },
        { "missing fields", """{"product": "PRODUCT", "spectra": [{"content": "1"}]}""", 422, "invalid-field", "/spectra/0/name" },
        { "missing lot", """{"product": "PRODUCT", "spectra": []}""", 422, "invalid-field", "/lot" },
        { "unknown field", Body("\"colour\": \"blue\""), 422, "invalid-field", "/colour" },
        { "bad time", Body("\"sampledAt\": \"yesterday\""), 422, "invalid-field", "/sampledAt" },
        { "bad sequence", Body("\"sequence\": 0"), 422, "invalid-field", "/sequence" },
        { "bad callback", Body("\"callback\": \"file:///etc/passwd\""), 422, "invalid-field", "/callback" },
        { "unknown standard", Body("\"sample\": {\"internalStandard\": {\"substance\": \"x\", \"massMg\": 1, \"purityPercent\": 99}}"), 422, "invalid-field", "/sample/internalStandard/substance" },
        { "impossible standard", Body("\"sample\": {\"internalStandard\": {\"substance\": \"x\", \"smiles\": \"C(C)(C)(C)(C)C\", \"massMg\": 1, \"purityPercent\": 99}}"), 422, "invalid-field", "/sample/internalStandard/smiles" },
        { "no spectra", """{"product": "PRODUCT", "lot": "1", "spectra": []}""", 422, "invalid-field", "/spectra" },
        { "null spectrum", """{"product": "PRODUCT", "lot": "1", "spectra": [null]}""", 422, "invalid-field", "/spectra/0/name" },
        { "unknown format", """{"product": "PRODUCT", "lot": "1", "spectra": [{"name": "a", "format": "wav", "content": ""}]}""", 422, "invalid-field", "/spectra/0/format" },
        { "bad base64", """{"product": "PRODUCT", "lot": "1", "spectra": [{"name": "a", "content": "%%", "encoding": "base64"}]}""", 422, "invalid-field", "/spectra/0/content" },
        { "no content", """{"product": "PRODUCT", "lot": "1", "spectra": [{"name": "a"}]}""", 422, "invalid-field", "/spectra/0/content" },
        { "no lot number", """{"product": "PRODUCT", "lot": " ", "spectra": [{"name": "a", "content": "1"}]}""", 422, "invalid-field", "/lot" },
        { "null product", """{"product": null, "lot": "1", "spectra": [{"name": "a", "content": "1"}]}""", 422, "invalid-field", "/product" },
        { "unknown product", """{"product": "nothing", "lot": "1", "spectra": [{"name": "a", "content": "1"}]}""", 422, "unknown-product", "/product" },
        { "NUL in a text", """{"product": "PRODUCT", "lot": "a\u0000b", "spectra": [{"name": "a", "content": "1"}]}""", 400, "malformed", null },
        { "half a character", """{"product": "PRODUCT", "lot": "\ud800", "spectra": [{"name": "a", "content": "1"}]}""", 422, "invalid-field", "/lot" },
    };

    [Theory]
    [MemberData(nameof(Bodies))]
    public async Task A_body_that_is_wrong_is_refused_with_its_place(string name, string body, int status, string type, string? pointer)
    {
        Assert.NotEmpty(name);
        string product = await Plant.ProductAsync(service);
        await AssertNothingKept(
            () => service.Lims.PostAsync("/api/v1/lots", new StringContent(body.Replace("PRODUCT", product, StringComparison.Ordinal), Encoding.UTF8, Json)),
            status, type, pointer);
    }

    [Fact]
    public async Task A_product_without_an_approved_specification_takes_no_lots()
    {
        string code = Plant.Unique("P");
        HttpClient owner = await service.AsAsync(ServiceFixture.MethodOwner);
        await (await owner.PostAsJsonAsync("/api/v1/products", new { code, name = "ethyl acetate", structure = new { smiles = "CCOC(C)=O" } })).JsonAsync(HttpStatusCode.Created);
        await (await owner.PostAsJsonAsync($"/api/v1/products/{code}/specifications", new { })).JsonAsync(HttpStatusCode.Created);
        await AssertNothingKept(() => Plant.SubmitAsync(service.Lims, Plant.Lot(code)), 422, "no-specification", "/product");
    }

    [Fact]
    public async Task A_body_that_is_too_large_is_refused()
    {
        string product = await Plant.ProductAsync(service);
        JsonObject lot = Plant.Lot(product);
        lot["spectra"]![0]!["content"] = new string('1', (int)ServiceFixture.LargestBodyBytes);
        await AssertNothingKept(() => Plant.SubmitAsync(service.Lims, lot), 413, "too-large", null);
    }

    [Fact]
    public async Task A_media_type_that_is_not_taken_is_refused() =>
        await AssertNothingKept(() => service.Lims.PostAsync("/api/v1/lots", new StringContent("<lot/>", Encoding.UTF8, "application/xml")), 415, "unsupported-media-type", null);

    [Fact]
    public async Task A_form_without_its_lot_or_its_file_is_refused()
    {
        string product = await Plant.ProductAsync(service);
        await AssertNothingKept(
            () => service.Lims.PostAsync("/api/v1/lots", new MultipartFormDataContent { { new StringContent("1"), "proton", "a.csv" } }), 400, "malformed", null);
        string lot = $$"""{"product": "{{product}}", "lot": "1", "spectra": [{"name": "proton", "format": "csv"}]}""";
        await AssertNothingKept(
            () => service.Lims.PostAsync("/api/v1/lots", new MultipartFormDataContent { { new StringContent(lot), "lot" } }), 422, "invalid-field", "/spectra/0/content");
        var broken = new StringContent("--x\r\nnot a form", Encoding.UTF8);
        broken.Headers.ContentType = System.Net.Http.Headers.MediaTypeHeaderValue.Parse("multipart/form-data; boundary=x");
        await AssertNothingKept(() => service.Lims.PostAsync("/api/v1/lots", broken), 400, "malformed", null);
    }

    [Fact]
    public async Task A_spectrum_of_no_numbers_is_kept_as_received_and_judged_unreadable()
    {
        string product = await Plant.ProductAsync(service);
        JsonObject lot = Plant.Lot(product);
        lot["spectra"]![0]!["content"] = "10,1\n9,NaN\n8,1\n";
        JsonNode answer = await (await Plant.SubmitAsync(service.Lims, lot)).JsonAsync();
        Assert.Equal("unreadable", (string?)answer["state"]);
        Assert.NotNull(answer["spectra"]![0]!["error"]);
    }

    [Fact]
    public async Task The_same_lot_twice_conflicts_and_the_next_sequence_does_not()
    {
        string product = await Plant.ProductAsync(service);
        JsonObject lot = Plant.Lot(product);
        await (await Plant.SubmitAsync(service.Lims, lot)).JsonAsync();
        await AssertNothingKept(() => Plant.SubmitAsync(service.Lims, lot), 409, "lot-exists", "/lot");
        lot["sequence"] = 2;
        Assert.Equal(2, (int)(await (await Plant.SubmitAsync(service.Lims, lot)).JsonAsync())["sequence"]!);
    }

    [Fact]
    public async Task A_repeated_key_gives_the_first_answer_and_refuses_another_body()
    {
        string product = await Plant.ProductAsync(service);
        JsonObject lot = Plant.Lot(product);
        string key = Plant.Unique("key");
        JsonNode first = await (await Plant.SubmitAsync(service.Lims, lot, key)).JsonAsync();
        long before = await service.CountRecordsAsync();
        JsonNode again = await (await Plant.SubmitAsync(service.Lims, lot, key)).JsonAsync();
        Assert.Equal(first.ToJsonString(), again.ToJsonString());
        Assert.Equal(before, await service.CountRecordsAsync());
        lot["instrument"] = "bench-3";
        await AssertNothingKept(() => Plant.SubmitAsync(service.Lims, lot, key), 422, "idempotency-key-reused", null);
    }

    [Fact]
    public async Task The_same_key_sent_many_times_at_once_makes_one_lot()
    {
        string product = await Plant.ProductAsync(service);
        JsonObject lot = Plant.Lot(product);
        string key = Plant.Unique("key");
        HttpResponseMessage[] answers = await Task.WhenAll(Enumerable.Range(0, 6).Select(_ => Plant.SubmitAsync(service.Lims, lot, key)));
        var ids = new HashSet<string>();
        foreach (HttpResponseMessage answer in answers)
        {
            ids.Add((string)(await answer.JsonAsync())["id"]!);
        }

        Assert.Single(ids);
        Assert.Equal(1L, await service.SqlAsync($"SELECT count(*) FROM qc.computations WHERE lot_id = '{ids.Single()}'"));
    }

    private static string Body(string member) =>
        $$"""{"product": "PRODUCT", "lot": "1", "spectra": [{"name": "a", "format": "csv", "content": "1"}], {{member}}}""";

    private async Task AssertNothingKept(Func<Task<HttpResponseMessage>> send, int status, string type, string? pointer)
    {
        long before = await service.CountRecordsAsync();
        await (await send()).ProblemAsync(status, type, pointer);
        Assert.Equal(before, await service.CountRecordsAsync());
    }
}
