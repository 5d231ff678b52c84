using System.Net;
using System.Net.Http.Json;
using System.Text.Json.Nodes;
using Qc.Service.Tests.Support;
using Xunit;

namespace Qc.Service.Tests;

/// <summary>A released lot becomes the reference by which later lots are judged. Spectra are simulated.</summary>
[Collection(ServiceCollection.Name)]
public sealed class ReferenceTests(ServiceFixture service)
{
    [Fact]
    public async Task A_lot_that_a_reviewer_released_becomes_the_reference_and_serves_another_field()
    {
        string product = await Plant.ProductAsync(service, "propyl acetate", "CCCOC(C)=O");
        JsonNode lot = await Plant.CheckedLotAsync(service, product, "propyl acetate");
        Assert.Null(lot["reference"]);
        Assert.All(lot["protons"]!.AsArray(), p => Assert.Equal("increments", (string?)p!["basis"]));
        HttpClient reviewer = await service.AsAsync(ServiceFixture.Reviewer);
        await (await reviewer.PostAsJsonAsync(
            $"/api/v1/lots/{lot["id"]}/reviews", new { decision = "release", reason = "All findings pass.", password = ServiceFixture.Password })).JsonAsync(HttpStatusCode.Created);

        HttpClient owner = await service.AsAsync(ServiceFixture.MethodOwner);
        JsonNode reference = await (await owner.PostAsJsonAsync($"/api/v1/products/{product}/reference", new { lot = (string?)lot["id"] })).JsonAsync(HttpStatusCode.Created);
        Assert.Equal("released", (string?)reference["state"]);
        Assert.True((bool)reference["inForce"]!);
        Assert.Equal(4, reference["constants"]!["shifts"]!.AsArray().Count);

        JsonNode bench = await (await Plant.SubmitAsync(service.Lims, Plant.Lot(product, "propyl acetate", frequencyMHz: 80))).JsonAsync();
        Assert.Equal((string?)lot["lot"], (string?)bench["reference"]);
        Assert.All(bench["protons"]!.AsArray(), p => Assert.Equal("reference", (string?)p!["basis"]));
        Assert.True((string?)bench["verdict"] == "pass", (string?)bench["summary"]);
        Assert.All(
            bench["findings"]!.AsArray().Where(f => (string?)f!["criterion"] == "identity.shift"),
            f => Assert.Equal(0.06, (double)f!["high"]! - (double)f["low"]!, 9));

        JsonNode isomer = await Plant.CheckedLotAsync(service, product, "isopropyl acetate");
        Assert.Equal("flag", (string?)isomer["verdict"]);
    }

    [Fact]
    public async Task A_lot_that_nobody_released_waits_for_a_second_person()
    {
        string product = await Plant.ProductAsync(service, "propyl acetate", "CCCOC(C)=O");
        JsonNode lot = await Plant.CheckedLotAsync(service, product, "propyl acetate");
        HttpClient owner = await service.AsAsync(ServiceFixture.MethodOwner);
        JsonNode reference = await (await owner.PostAsJsonAsync($"/api/v1/products/{product}/reference", new { lot = (string?)lot["id"] })).JsonAsync(HttpStatusCode.Created);
        Assert.Equal("proposed", (string?)reference["state"]);
        Assert.Null((await Plant.CheckedLotAsync(service, product, "propyl acetate"))["reference"]);

        string release = $"/api/v1/products/{product}/reference/1/release";
        await (await owner.PostAsJsonAsync(release, new { password = ServiceFixture.Password })).ProblemAsync(403, "not-allowed");
        HttpClient quality = await service.AsAsync(ServiceFixture.QualityUnit);
        await (await quality.PostAsJsonAsync(release, new { password = "wrong wrong wrong" })).ProblemAsync(422, "wrong-password", "/password");
        Assert.Equal("released", (string?)(await (await quality.PostAsJsonAsync(release, new { password = ServiceFixture.Password })).JsonAsync())["state"]);
        await (await quality.PostAsJsonAsync(release, new { password = ServiceFixture.Password })).ProblemAsync(409, "already-released");
        Assert.Equal((string?)lot["lot"], (string?)(await Plant.CheckedLotAsync(service, product, "propyl acetate"))["reference"]);

        await (await quality.PostAsJsonAsync($"/api/v1/products/{product}/reference/1/withdraw", new { password = ServiceFixture.Password })).JsonAsync();
        Assert.Null((await Plant.CheckedLotAsync(service, product, "propyl acetate"))["reference"]);
        JsonNode all = await (await owner.GetAsync($"/api/v1/products/{product}/reference")).JsonAsync();
        Assert.Equal("withdrawn", (string?)all[0]!["state"]);
    }

    [Fact]
    public async Task Only_a_readable_lot_of_the_product_can_be_its_reference()
    {
        string product = await Plant.ProductAsync(service, "propyl acetate", "CCCOC(C)=O");
        string other = await Plant.ProductAsync(service);
        HttpClient owner = await service.AsAsync(ServiceFixture.MethodOwner);
        string address = $"/api/v1/products/{product}/reference";
        JsonNode unreadable = await Plant.CheckedLotAsync(service, product);
        JsonNode foreign = await Plant.CheckedLotAsync(service, other, "ethyl acetate");
        foreach (string? lot in new[] { (string?)unreadable["id"], (string?)foreign["id"], "none" })
        {
            await (await owner.PostAsJsonAsync(address, new { lot })).ProblemAsync(422, "invalid-field", "/lot");
        }

        await (await owner.PostAsJsonAsync("/api/v1/products/none/reference", new { lot = "none" })).ProblemAsync(404, "not-found");
        HttpClient reviewer = await service.AsAsync(ServiceFixture.Reviewer);
        Assert.Equal(HttpStatusCode.Forbidden, (await reviewer.PostAsJsonAsync(address, new { lot = "none" })).StatusCode);
    }
}
