using System.Net;
using System.Net.Http.Json;
using System.Text.Json.Nodes;
using Qc.Service.Tests.Support;
using Xunit;

namespace Qc.Service.Tests;

/// <summary>What every call has in common: errors, request ids, health, figures, the description of the API.</summary>
[Collection(ServiceCollection.Name)]
public sealed class HostTests(ServiceFixture service)
{
    /// <summary>Every call of the contract that is built.</summary>
    private static readonly (string Method, string Path)[] Contract =
    [
        ("post", "/api/v1/session"), ("delete", "/api/v1/session"),
        ("post", "/api/v1/products"), ("get", "/api/v1/products"), ("get", "/api/v1/products/{code}"),
        ("post", "/api/v1/products/{code}/specifications"), ("post", "/api/v1/products/{code}/specifications/{version}/approve"),
        ("post", "/api/v1/lots"), ("get", "/api/v1/lots"), ("get", "/api/v1/lots/{id}"),
        ("get", "/api/v1/lots/{id}/spectra/{n}/original"), ("get", "/api/v1/lots/{id}/spectra/{n}/trace"),
        ("post", "/api/v1/lots/{id}/reviews"), ("get", "/api/v1/lots/{id}/certificate"),
        ("get", "/api/v1/audit"), ("get", "/api/v1/audit/head"), ("get", "/api/v1/audit/entries/{index}/proof"), ("get", "/api/v1/audit/consistency"),
        ("post", "/api/v1/people"), ("post", "/api/v1/keys"), ("get", "/api/v1/keys"), ("delete", "/api/v1/keys/{id}"),
    ];

    [Fact]
    public async Task The_description_is_openapi_3_1_and_has_every_call()
    {
        using HttpClient anonymous = service.Anonymous();
        JsonNode document = await (await anonymous.GetAsync("/openapi/v1.json")).JsonAsync();
        Assert.StartsWith("3.1.", (string?)document["openapi"], StringComparison.Ordinal);
        JsonObject paths = document["paths"]!.AsObject();
        var described = paths.SelectMany(p => p.Value!.AsObject().Select(m => $"{m.Key} {p.Key.TrimEnd('/')}")).ToHashSet();
        Assert.All(Contract, call => Assert.Contains($"{call.Method} {call.Path}", described));
        foreach (string reference in References(document))
        {
            Assert.NotNull(Resolve(document, reference));
        }

        Assert.All(paths.SelectMany(p => p.Value!.AsObject()), operation => Assert.NotEmpty(operation.Value!["responses"]!.AsObject()));
        HttpResponseMessage docs = await anonymous.GetAsync("/docs/index.html");
        Assert.Equal(HttpStatusCode.OK, docs.StatusCode);
    }

    [Theory]
    [InlineData("GET", "/api/v1/nothing", 404, "not-found")]
    [InlineData("PUT", "/api/v1/products", 405, "method-not-allowed")]
    [InlineData("GET", "/api/v1/products/none", 404, "not-found")]
    [InlineData("GET", "/api/v1/lots?product=%00", 400, "malformed")]
    [InlineData("GET", "/api/v1/lots/none", 404, "not-found")]
    [InlineData("GET", "/api/v1/lots/none/certificate", 404, "not-found")]
    [InlineData("GET", "/api/v1/lots/none/spectra/x/trace", 404, "not-found")]
    [InlineData("GET", "/api/v1/lots/none/spectra/1/trace", 404, "not-found")]
    [InlineData("GET", "/api/v1/lots/none/spectra/1/trace?points=many", 400, "malformed")]
    public async Task An_error_is_problem_json_and_the_unknown_reveals_nothing(string method, string address, int status, string type)
    {
        using var request = new HttpRequestMessage(new HttpMethod(method), address);
        await (await (await service.AsAsync(ServiceFixture.MethodOwner)).SendAsync(request)).ProblemAsync(status, type);
    }

    [Fact]
    public async Task A_request_id_is_echoed_and_one_that_could_forge_a_log_line_is_not()
    {
        using HttpClient anonymous = service.Anonymous();
        Assert.Equal("lims-42", await IdAsync("lims-42"));
        Assert.NotEqual("a b", await IdAsync("a b"));
        Assert.NotEmpty(await IdAsync(null));

        async Task<string> IdAsync(string? sent)
        {
            using var request = new HttpRequestMessage(HttpMethod.Get, "/health/live");
            if (sent is not null)
            {
                request.Headers.TryAddWithoutValidation("X-Request-Id", sent);
            }

            return (await anonymous.SendAsync(request)).Headers.GetValues("X-Request-Id").Single();
        }
    }

    [Fact]
    public async Task Health_and_figures_are_open_to_the_monitor()
    {
        string product = await Plant.ProductAsync(service);
        await Plant.CheckedLotAsync(service, product);
        using HttpClient anonymous = service.Anonymous();
        Assert.Equal(HttpStatusCode.OK, (await anonymous.GetAsync("/health/live")).StatusCode);
        Assert.Equal(HttpStatusCode.OK, (await anonymous.GetAsync("/health/ready")).StatusCode);
        string figures = await anonymous.GetStringAsync("/metrics");
        Assert.Matches("(?m)^qc_lots_checked_total\\{.*verdict=\"unreadable\".*\\} [1-9]", figures);
        Assert.Matches("(?m)^qc_check_duration_seconds_count.* [1-9]", figures);
    }

    private static IEnumerable<string> References(JsonNode? node) => node switch
    {
        JsonObject o => o.SelectMany(m => m.Key == "$ref" ? [(string)m.Value!] : References(m.Value)),
        JsonArray a => a.SelectMany(References),
        _ => [],
    };

    private static JsonNode? Resolve(JsonNode document, string reference)
    {
        Assert.StartsWith("#/", reference, StringComparison.Ordinal);
        JsonNode? node = document;
        foreach (string part in reference[2..].Split('/'))
        {
            node = node?[part.Replace("~1", "/", StringComparison.Ordinal).Replace("~0", "~", StringComparison.Ordinal)];
        }

        return node;
    }
}
