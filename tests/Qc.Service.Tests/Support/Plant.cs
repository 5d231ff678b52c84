using System.Globalization;
using System.Net;
using System.Net.Http.Json;
using System.Text;
using System.Text.Json.Nodes;
using Qc.Engine.Reading;
using Qc.Service.Demo;
using Xunit;

namespace Qc.Service.Tests.Support;

/// <summary>Sets up products and submits lots, as a plant does.</summary>
internal static class Plant
{
    private static int _number;

    /// <summary>A simulated spectrum of a substance in CDCl3 with solvent, water and reference, as JCAMP-DX.</summary>
    public static string Spectrum(string substance, double frequencyMHz = 400) => Encoding.UTF8.GetString(JcampWriter.Write(Measured(substance, frequencyMHz)));

    /// <summary>A new code or lot number.</summary>
    public static string Unique(string prefix) => string.Create(CultureInfo.InvariantCulture, $"{prefix}-{Interlocked.Increment(ref _number)}");

    /// <summary>A product with an approved specification; answers its code.</summary>
    public static async Task<string> ProductAsync(ServiceFixture service, string name = "ethyl acetate", string smiles = "CCOC(C)=O", object? specification = null)
    {
        string code = Unique("P");
        HttpClient owner = await service.AsAsync(ServiceFixture.MethodOwner);
        await (await owner.PostAsJsonAsync("/api/v1/products", new { code, name, structure = new { smiles }, solvent = "CDCl3", nucleus = "1H" })).JsonAsync(HttpStatusCode.Created);
        await (await owner.PostAsJsonAsync($"/api/v1/products/{code}/specifications", specification ?? new { })).JsonAsync(HttpStatusCode.Created);
        HttpClient quality = await service.AsAsync(ServiceFixture.QualityUnit);
        await (await quality.PostAsJsonAsync($"/api/v1/products/{code}/specifications/1/approve", new { password = ServiceFixture.Password })).JsonAsync();
        return code;
    }

    /// <summary>The body of a submission.</summary>
    public static JsonObject Lot(string product, string? substance = null, string? lot = null, double frequencyMHz = 400) => new()
    {
        ["product"] = product,
        ["lot"] = lot ?? Unique("L"),
        ["instrument"] = "bench-2",
        ["spectra"] = new JsonArray(new JsonObject
        {
            ["name"] = "proton",
            ["format"] = substance is null ? "csv" : "jcamp-dx",
            ["content"] = substance is null ? "not a spectrum" : Spectrum(substance, frequencyMHz),
            ["encoding"] = "text",
        }),
    };

    /// <summary>Submits a body and waits for the verdict.</summary>
    public static async Task<HttpResponseMessage> SubmitAsync(HttpClient client, JsonNode body, string? idempotencyKey = null)
    {
        using var request = new HttpRequestMessage(HttpMethod.Post, "/api/v1/lots") { Content = JsonContent.Create(body) };
        request.Headers.Add("Prefer", "wait=60");
        if (idempotencyKey is not null)
        {
            request.Headers.Add("Idempotency-Key", idempotencyKey);
        }

        return await client.SendAsync(request);
    }

    /// <summary>A checked lot.</summary>
    public static async Task<JsonNode> CheckedLotAsync(ServiceFixture service, string product, string? substance = null, HttpClient? submitter = null)
    {
        JsonNode lot = await (await SubmitAsync(submitter ?? service.Lims, Lot(product, substance))).JsonAsync();
        Assert.NotEqual("queued", (string?)lot["state"]);
        return lot;
    }

    private static SpectrumMeasurement Measured(string substance, double frequencyMHz)
    {
        var measurement = new DemoMeasurement(frequencyMHz, "CDCl3", 0.8, 500, Seed: 20260417);
        double[] intensity = DemoSpectrum.Make(measurement, (substance, 1), ("residual solvent", 0.05), ("water", 0.02), ("TMS", 0.02));
        var facts = new AcquisitionFacts { Title = substance, Nucleus = "1H", ObserveFrequencyMHz = frequencyMHz, ZeroPpmFrequencyMHz = frequencyMHz, SolventLabel = "CDCl3" };
        return new SpectrumMeasurement(facts, [], intensity, null, measurement.FirstPpm, DemoSpectrum.PpmPerPoint(measurement), true);
    }
}
