using System.Net;
using System.Net.Http.Headers;
using System.Net.Http.Json;
using System.Text.Json.Nodes;
using Qc.Service.Tests.Support;
using Xunit;

namespace Qc.Service.Tests;

/// <summary>Who may do what, and what those who may not are told.</summary>
[Collection(ServiceCollection.Name)]
public sealed class AccessTests(ServiceFixture service)
{
    [Theory]
    [InlineData("GET", "/api/v1/products")]
    [InlineData("GET", "/api/v1/lots")]
    [InlineData("GET", "/api/v1/lots/1")]
    [InlineData("POST", "/api/v1/lots")]
    [InlineData("GET", "/api/v1/lots/1/spectra/1/original")]
    [InlineData("GET", "/api/v1/lots/1/spectra/1/trace")]
    [InlineData("POST", "/api/v1/lots/1/reviews")]
    [InlineData("GET", "/api/v1/lots/1/certificate")]
    [InlineData("GET", "/api/v1/audit")]
    [InlineData("GET", "/api/v1/audit/export")]
    [InlineData("POST", "/api/v1/people")]
    [InlineData("GET", "/api/v1/keys")]
    public async Task Nobody_gets_in_without_a_session_or_a_key(string method, string address)
    {
        using HttpClient anonymous = service.Anonymous();
        using var request = new HttpRequestMessage(new HttpMethod(method), address);
        await (await anonymous.SendAsync(request)).ProblemAsync(401, "sign-in-needed");
    }

    [Theory]
    [InlineData(ServiceFixture.Submitter, "POST", "/api/v1/products")]
    [InlineData(ServiceFixture.MethodOwner, "POST", "/api/v1/lots")]
    [InlineData(ServiceFixture.Submitter, "POST", "/api/v1/lots/1/reviews")]
    [InlineData(ServiceFixture.MethodOwner, "POST", "/api/v1/products/x/specifications/1/approve")]
    [InlineData(ServiceFixture.Reviewer, "GET", "/api/v1/audit")]
    [InlineData(ServiceFixture.Auditor, "POST", "/api/v1/lots")]
    [InlineData(ServiceFixture.QualityUnit, "POST", "/api/v1/keys")]
    [InlineData(ServiceFixture.Auditor, "POST", "/api/v1/people")]
    public async Task A_role_does_only_what_is_its_own(string user, string method, string address)
    {
        using var request = new HttpRequestMessage(new HttpMethod(method), address) { Content = JsonContent.Create(new { }) };
        await (await (await service.AsAsync(user)).SendAsync(request)).ProblemAsync(403, "not-allowed");
    }

    [Fact]
    public async Task A_key_does_only_what_its_scopes_say()
    {
        string product = await Plant.ProductAsync(service);
        using HttpClient reader = await service.KeyAsync("lots:read");
        long before = await service.CountRecordsAsync();
        await (await Plant.SubmitAsync(reader, Plant.Lot(product))).ProblemAsync(403, "not-allowed");
        await (await reader.GetAsync("/api/v1/audit")).ProblemAsync(403, "not-allowed");
        await (await reader.PostAsJsonAsync("/api/v1/lots/1/reviews", new { })).ProblemAsync(403, "not-allowed");
        await (await reader.GetAsync($"/api/v1/products/{product}")).ProblemAsync(403, "not-allowed");
        Assert.Equal(HttpStatusCode.OK, (await reader.GetAsync("/api/v1/lots")).StatusCode);
        Assert.Equal(before, await service.CountRecordsAsync());
    }

    [Fact]
    public async Task An_expired_a_revoked_and_an_invented_key_are_refused_alike()
    {
        (_, HttpClient expired) = await service.NewKeyAsync(new DateTimeOffset(2020, 1, 1, 0, 0, 0, TimeSpan.FromHours(1)), "lots:read");
        (string id, HttpClient revoked) = await service.NewKeyAsync(null, "lots:read");
        Assert.Equal(HttpStatusCode.OK, (await revoked.GetAsync("/api/v1/lots")).StatusCode);
        HttpClient administrator = await service.AsAsync(ServiceFixture.Administrator);
        Assert.Equal(HttpStatusCode.NoContent, (await administrator.DeleteAsync($"/api/v1/keys/{id}")).StatusCode);
        using HttpClient invented = service.Anonymous();
        invented.DefaultRequestHeaders.Authorization = new AuthenticationHeaderValue("Bearer", $"qc_{id}_00");
        using HttpClient nonsense = service.Anonymous();
        nonsense.DefaultRequestHeaders.TryAddWithoutValidation("Authorization", "Basic eDp5");
        var said = new HashSet<string>();
        foreach (HttpClient client in new[] { expired, revoked, invented, nonsense })
        {
            said.Add((await (await client.GetAsync("/api/v1/lots")).ProblemAsync(401, "sign-in-needed")).ToJsonString());
        }

        Assert.Single(said);
    }

    [Fact]
    public async Task A_key_is_shown_once_and_stored_hashed()
    {
        HttpClient administrator = await service.AsAsync(ServiceFixture.Administrator);
        JsonNode made = await (await administrator.PostAsJsonAsync("/api/v1/keys", new { name = "LIMS", scopes = new[] { "lots:read" } })).JsonAsync(HttpStatusCode.Created);
        string secret = ((string)made["key"]!).Split('_')[2];
        JsonNode listed = (await (await administrator.GetAsync("/api/v1/keys")).JsonAsync()).AsArray().Single(k => (string?)k!["id"] == (string?)made["id"])!;
        Assert.Null(listed["key"]);
        Assert.Equal(0L, await service.SqlAsync($"SELECT count(*) FROM qc.lims_keys k WHERE k::text LIKE '%{secret}%'"));
        Assert.Equal(0L, await service.SqlAsync($"SELECT count(*) FROM qc.audit_rows a WHERE a::text LIKE '%{secret}%'"));
    }

    [Fact]
    public async Task A_wrong_name_a_wrong_password_and_a_locked_account_sound_alike()
    {
        HttpClient administrator = await service.AsAsync(ServiceFixture.Administrator);
        string user = Plant.Unique("lou");
        await (await administrator.PostAsJsonAsync("/api/v1/people", new { user, printedName = "Lou", password = ServiceFixture.Password, roles = new[] { "auditor" } })).JsonAsync(HttpStatusCode.Created);
        using HttpClient anonymous = service.Anonymous();
        var said = new HashSet<string> { await SignIn("nobody", ServiceFixture.Password) };
        for (int i = 0; i < 5; i++)
        {
            said.Add(await SignIn(user, "wrong wrong wrong"));
        }

        said.Add(await SignIn(user, ServiceFixture.Password)); // Right, but locked by now.
        Assert.Single(said);

        async Task<string> SignIn(string name, string password) =>
            (await (await anonymous.PostAsJsonAsync("/api/v1/session", new { user = name, password })).ProblemAsync(401, "sign-in-needed")).ToJsonString();
    }

    [Theory]
    [InlineData("Sec-Fetch-Site", "cross-site")]
    [InlineData("Sec-Fetch-Site", "same-site")]
    [InlineData("Origin", "https://evil.example")]
    [InlineData("Origin", "null")]
    public async Task A_session_is_not_used_from_another_site(string header, string value)
    {
        long before = await service.CountRecordsAsync();
        using var request = new HttpRequestMessage(HttpMethod.Post, "/api/v1/products")
        {
            Content = JsonContent.Create(new { code = Plant.Unique("P"), name = "x", structure = new { smiles = "CCO" } }),
        };
        request.Headers.TryAddWithoutValidation(header, value);
        await (await (await service.AsAsync(ServiceFixture.MethodOwner)).SendAsync(request)).ProblemAsync(403, "not-allowed");
        Assert.Equal(before, await service.CountRecordsAsync());
    }

    [Theory]
    [InlineData("short", "/password")]
    [InlineData("aaaaaaaaaaaaaaaa", "/password")]
    public async Task A_password_is_long(string password, string pointer)
    {
        HttpClient administrator = await service.AsAsync(ServiceFixture.Administrator);
        long before = await service.CountRecordsAsync();
        await (await administrator.PostAsJsonAsync("/api/v1/people", new { user = Plant.Unique("p"), printedName = "P", password, roles = new[] { "auditor" } }))
            .ProblemAsync(422, "invalid-field", pointer);
        Assert.Equal(before, await service.CountRecordsAsync());
    }

    [Fact]
    public async Task An_account_has_known_roles_and_a_name_of_its_own()
    {
        HttpClient administrator = await service.AsAsync(ServiceFixture.Administrator);
        long before = await service.CountRecordsAsync();
        await (await administrator.PostAsJsonAsync("/api/v1/people", new { user = Plant.Unique("p"), printedName = "P", password = ServiceFixture.Password, roles = new[] { "king" } }))
            .ProblemAsync(422, "invalid-field", "/roles");
        await (await administrator.PostAsJsonAsync("/api/v1/people", new { user = "RITA", printedName = "P", password = ServiceFixture.Password, roles = new[] { "auditor" } }))
            .ProblemAsync(409, "user-exists");
        using HttpClient anonymous = service.Anonymous();
        await (await anonymous.PostAsJsonAsync("/api/v1/set-up", new { user = "eve", printedName = "Eve", password = ServiceFixture.Password })).ProblemAsync(409, "set-up-done");
        Assert.Equal(before, await service.CountRecordsAsync());
    }

    [Fact]
    public async Task Signing_out_ends_the_session()
    {
        using HttpClient client = service.Anonymous();
        JsonNode session = await (await client.PostAsJsonAsync("/api/v1/session", new { user = ServiceFixture.Auditor, password = ServiceFixture.Password })).JsonAsync();
        Assert.Equal(["auditor"], session["roles"]!.AsArray().Select(r => (string)r!));
        Assert.Equal(HttpStatusCode.OK, (await client.GetAsync("/api/v1/session")).StatusCode);
        Assert.Equal(HttpStatusCode.NoContent, (await client.DeleteAsync("/api/v1/session")).StatusCode);
        await (await client.GetAsync("/api/v1/session")).ProblemAsync(401, "sign-in-needed");
    }
}
