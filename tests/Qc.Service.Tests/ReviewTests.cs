using System.Net;
using System.Net.Http.Json;
using System.Text.Json.Nodes;
using Qc.Service.Tests.Support;
using Xunit;

namespace Qc.Service.Tests;

/// <summary>Decisions that are refused.</summary>
[Collection(ServiceCollection.Name)]
public sealed class ReviewTests(ServiceFixture service)
{
    [Theory]
    [InlineData("""{"decision": "reject", "reason": "Wrong isomer.", "password": "wrong wrong wrong"}""", 422, "wrong-password", "/password")]
    [InlineData("""{"decision": "reject", "reason": "Wrong isomer."}""", 422, "invalid-field", "/password")]
    [InlineData("""{"decision": "reject", "reason": " ", "password": "correct horse battery"}""", 422, "invalid-field", "/reason")]
    [InlineData("""{"decision": "fail", "reason": "Wrong isomer.", "password": "correct horse battery"}""", 422, "invalid-field", "/decision")]
    [InlineData("""{"decision": "reject", "reason": "x", "password": "correct horse battery", "findings": [null]}""", 422, "invalid-field", "/findings/0")]
    [InlineData("""{"decision": "reject"}""", 422, "invalid-field", "/reason")]
    [InlineData("""{"decision": """, 400, "malformed", null)]
    public async Task A_decision_that_is_not_complete_or_not_signed_is_refused(string body, int status, string type, string? pointer)
    {
        string id = await LotAsync();
        HttpClient reviewer = await service.AsAsync(ServiceFixture.Reviewer);
        long before = await service.CountRecordsAsync();
        await (await reviewer.PostAsync($"/api/v1/lots/{id}/reviews", new StringContent(body, System.Text.Encoding.UTF8, "application/json"))).ProblemAsync(status, type, pointer);
        Assert.Equal(before, await service.CountRecordsAsync());
        await (await Decide(reviewer, id)).JsonAsync(HttpStatusCode.Created); // Also clears the count of wrong passwords.
    }

    [Fact]
    public async Task Nobody_decides_on_a_lot_they_submitted()
    {
        string product = await Plant.ProductAsync(service);
        HttpClient rob = await service.AsAsync(ServiceFixture.SecondReviewer);
        string id = (string)(await Plant.CheckedLotAsync(service, product, submitter: rob))["id"]!;
        long before = await service.CountRecordsAsync();
        await (await Decide(rob, id)).ProblemAsync(403, "not-allowed");
        Assert.Equal(before, await service.CountRecordsAsync());
    }

    [Fact]
    public async Task Of_two_reviewers_the_second_does_not_overwrite_the_first()
    {
        string id = await LotAsync();
        HttpClient rita = await service.AsAsync(ServiceFixture.Reviewer);
        HttpClient rob = await service.AsAsync(ServiceFixture.SecondReviewer);
        string seen = (await rita.GetAsync($"/api/v1/lots/{id}")).Headers.ETag!.Tag;
        await (await Decide(rita, id, seen)).JsonAsync(HttpStatusCode.Created);
        await (await Decide(rob, id, seen)).ProblemAsync(412, "changed");
        await (await Decide(rob, id)).ProblemAsync(409, "not-decidable");
        Assert.Equal(1L, await service.SqlAsync($"SELECT count(*) FROM qc.reviews WHERE lot_id = '{id}'"));
    }

    [Fact]
    public async Task Two_decisions_at_once_make_one()
    {
        string id = await LotAsync();
        HttpClient rita = await service.AsAsync(ServiceFixture.Reviewer);
        HttpClient rob = await service.AsAsync(ServiceFixture.SecondReviewer);
        HttpResponseMessage[] answers = await Task.WhenAll(Decide(rita, id), Decide(rob, id));
        Assert.Single(answers, a => a.StatusCode == HttpStatusCode.Created);
        Assert.Single(answers, a => a.StatusCode is HttpStatusCode.Conflict or HttpStatusCode.PreconditionFailed);
        Assert.Equal(1L, await service.SqlAsync($"SELECT count(*) FROM qc.reviews WHERE lot_id = '{id}'"));
    }

    [Fact]
    public async Task A_release_that_leaves_a_flag_open_is_refused()
    {
        string product = await Plant.ProductAsync(service, "propyl acetate", "CCCOC(C)=O");
        JsonNode lot = await Plant.CheckedLotAsync(service, product, "isopropyl acetate");
        JsonNode flag = lot["findings"]!.AsArray().First(f => (string?)f!["outcome"] == "flag")!;
        var finding = new { criterion = (string?)flag["criterion"], subject = (string?)flag["subject"], accepted = false };
        HttpClient reviewer = await service.AsAsync(ServiceFixture.Reviewer);
        long before = await service.CountRecordsAsync();
        await (await reviewer.PostAsJsonAsync(
            $"/api/v1/lots/{(string?)lot["id"]}/reviews",
            new { decision = "release", reason = "x", password = ServiceFixture.Password, findings = new[] { finding } })).ProblemAsync(422, "invalid-field", "/findings");
        Assert.Equal(before, await service.CountRecordsAsync());
    }

    private async Task<string> LotAsync()
    {
        string product = await Plant.ProductAsync(service);
        return (string)(await Plant.CheckedLotAsync(service, product))["id"]!;
    }

    private static async Task<HttpResponseMessage> Decide(HttpClient reviewer, string id, string? ifMatch = null)
    {
        using var request = new HttpRequestMessage(HttpMethod.Post, $"/api/v1/lots/{id}/reviews")
        {
            Content = JsonContent.Create(new { decision = "reject", reason = "Damaged file.", password = ServiceFixture.Password }),
        };
        if (ifMatch is not null)
        {
            request.Headers.TryAddWithoutValidation("If-Match", ifMatch);
        }

        return await reviewer.SendAsync(request);
    }
}
