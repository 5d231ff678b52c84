using System.Net;
using System.Net.Http.Json;
using System.Text;
using System.Text.Json.Nodes;
using Qc.Service.Tests.Support;
using Xunit;

namespace Qc.Service.Tests;

/// <summary>Products and specifications that are refused, and who may approve.</summary>
[Collection(ServiceCollection.Name)]
public sealed class ProductTests(ServiceFixture service)
{
    [Theory]
    [InlineData("""{"smiles": "C(C)(C)(C)(C)C"}""", "structure-unreadable", "/structure/smiles")]
    [InlineData("""{"smiles": "CC("}""", "structure-unreadable", "/structure/smiles")]
    [InlineData("""{"smiles": "Xx"}""", "structure-unreadable", "/structure/smiles")]
    [InlineData("""{"smiles": ""}""", "structure-unreadable", "/structure/smiles")]
    [InlineData("""{"molfile": "nothing"}""", "structure-unreadable", "/structure/molfile")]
    [InlineData("""{}""", "invalid-field", "/structure")]
    [InlineData("""{"smiles": "CC", "molfile": "x"}""", "invalid-field", "/structure")]
    [InlineData("null", "invalid-field", "/structure")]
    [InlineData("""{"smiles": "[U]"}""", null, null)]
    public async Task A_structure_that_cannot_be_read_or_judged_is_refused_with_its_place(string structure, string? type, string? pointer)
    {
        string body = $$"""{"code": "{{Plant.Unique("P")}}", "name": "x", "structure": {{structure}}, "solvent": "CDCl3", "nucleus": "1H"}""";
        long before = await service.CountRecordsAsync();
        HttpResponseMessage answer = await (await service.AsAsync(ServiceFixture.MethodOwner)).PostAsync("/api/v1/products", new StringContent(body, Encoding.UTF8, "application/json"));
        if (type is null)
        {
            Assert.True((int)answer.StatusCode is 201 or 422, await answer.Content.ReadAsStringAsync());
            return;
        }

        await answer.ProblemAsync(422, type, pointer);
        Assert.Equal(before, await service.CountRecordsAsync());
    }

    [Theory]
    [InlineData("code", "\"a b\"", "/code")]
    [InlineData("code", "\"\"", "/code")]
    [InlineData("code", "null", "/code")]
    [InlineData("name", "\" \"", "/name")]
    [InlineData("solvent", "\"water\"", "/solvent")]
    [InlineData("nucleus", "\"13C\"", "/nucleus")]
    [InlineData("colour", "1", "/colour")]
    public async Task A_product_with_a_wrong_field_is_refused(string field, string value, string pointer)
    {
        JsonObject body = new()
        {
            ["code"] = Plant.Unique("P"), ["name"] = "x", ["structure"] = new JsonObject { ["smiles"] = "CCO" }, ["solvent"] = "CDCl3", ["nucleus"] = "1H",
        };
        body[field] = JsonNode.Parse(value);
        long before = await service.CountRecordsAsync();
        await (await (await service.AsAsync(ServiceFixture.MethodOwner)).PostAsJsonAsync("/api/v1/products", body)).ProblemAsync(422, "invalid-field", pointer);
        Assert.Equal(before, await service.CountRecordsAsync());
    }

    [Fact]
    public async Task A_code_is_given_once()
    {
        string code = await Plant.ProductAsync(service);
        long before = await service.CountRecordsAsync();
        HttpClient owner = await service.AsAsync(ServiceFixture.MethodOwner);
        await (await owner.PostAsJsonAsync("/api/v1/products", new { code, name = "x", structure = new { smiles = "CCO" } })).ProblemAsync(409, "product-exists", "/code");
        Assert.Equal(before, await service.CountRecordsAsync());
    }

    [Theory]
    [InlineData("""{"identity": {"shiftTolerancePpm": 1}}""", "/identity/shiftTolerancePpm")]
    [InlineData("""{"identity": {"couplingToleranceHertz": -1}}""", "/identity/couplingToleranceHertz")]
    [InlineData("""{"identity": null}""", "/identity")]
    [InlineData("""{"assay": {"lowPercent": 102, "highPercent": 98}}""", "/assay/highPercent")]
    [InlineData("""{"rivals": [{"name": "x", "smiles": "C(("}]}""", "/rivals/0/smiles")]
    [InlineData("""{"rivals": [{"name": "itself", "smiles": "O=C(C)OCC"}]}""", "/rivals/0/smiles")]
    [InlineData("""{"rivals": [null]}""", "/rivals/0")]
    [InlineData("""{"rivals": null}""", "/rivals")]
    public async Task A_specification_that_cannot_be_meant_is_refused(string body, string pointer)
    {
        string code = await Plant.ProductAsync(service);
        long before = await service.CountRecordsAsync();
        HttpResponseMessage answer = await (await service.AsAsync(ServiceFixture.MethodOwner))
            .PostAsync($"/api/v1/products/{code}/specifications", new StringContent(body, Encoding.UTF8, "application/json"));
        Assert.Equal(HttpStatusCode.UnprocessableEntity, answer.StatusCode);
        await answer.ProblemAsync(422, pointer.EndsWith("smiles", StringComparison.Ordinal) && body.Contains("((", StringComparison.Ordinal) ? "structure-unreadable" : "invalid-field", pointer);
        Assert.Equal(before, await service.CountRecordsAsync());
    }

    [Fact]
    public async Task Nobody_approves_their_own_specification_and_none_is_approved_twice()
    {
        string code = await Plant.ProductAsync(service);
        HttpClient both = await service.AsAsync(ServiceFixture.OwnerAndQualityUnit);
        await (await both.PostAsJsonAsync($"/api/v1/products/{code}/specifications", new { })).JsonAsync(HttpStatusCode.Created);
        long before = await service.CountRecordsAsync();
        var signed = new { password = ServiceFixture.Password };
        await (await both.PostAsJsonAsync($"/api/v1/products/{code}/specifications/2/approve", signed)).ProblemAsync(403, "not-allowed");
        HttpClient quality = await service.AsAsync(ServiceFixture.QualityUnit);
        await (await quality.PostAsJsonAsync($"/api/v1/products/{code}/specifications/2/approve", new { password = "wrong wrong wrong" })).ProblemAsync(422, "wrong-password", "/password");
        await (await quality.PostAsJsonAsync($"/api/v1/products/{code}/specifications/2/approve", new { })).ProblemAsync(422, "invalid-field", "/password");
        await (await quality.PostAsync($"/api/v1/products/{code}/specifications/2/approve", null)).ProblemAsync(422, "invalid-field", "/password");
        await (await quality.PostAsJsonAsync($"/api/v1/products/{code}/specifications/1/approve", signed)).ProblemAsync(409, "already-approved");
        await (await quality.PostAsJsonAsync($"/api/v1/products/{code}/specifications/9/approve", signed)).ProblemAsync(404, "not-found");
        Assert.Equal(before, await service.CountRecordsAsync());
        await (await quality.PostAsJsonAsync($"/api/v1/products/{code}/specifications/2/approve", signed)).JsonAsync();
    }

    [Fact]
    public async Task A_version_holds_from_the_date_it_is_approved_for()
    {
        string code = await Plant.ProductAsync(service);
        HttpClient owner = await service.AsAsync(ServiceFixture.MethodOwner);
        await (await owner.PostAsJsonAsync($"/api/v1/products/{code}/specifications", new { })).JsonAsync(HttpStatusCode.Created);
        HttpClient quality = await service.AsAsync(ServiceFixture.QualityUnit);
        var later = new { password = ServiceFixture.Password, effectiveFrom = "2999-01-01T00:00:00+02:00" };
        JsonNode approved = await (await quality.PostAsJsonAsync($"/api/v1/products/{code}/specifications/2/approve", later)).JsonAsync();
        Assert.StartsWith("2998-12-31T22:00:00", (string?)approved["effectiveFrom"], StringComparison.Ordinal);
        Assert.Equal(1, (int)(await (await owner.GetAsync($"/api/v1/products/{code}")).JsonAsync())["specification"]!["version"]!);
    }

    [Fact]
    public async Task What_is_not_built_says_so()
    {
        string code = await Plant.ProductAsync(service);
        HttpClient owner = await service.AsAsync(ServiceFixture.MethodOwner);
        await (await owner.GetAsync($"/api/v1/products/{code}/specificity")).ProblemAsync(501, "not-built");
    }
}
