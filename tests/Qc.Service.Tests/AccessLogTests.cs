using System.Net;
using System.Net.Http.Headers;
using System.Net.Http.Json;
using Qc.Service.Tests.Support;
using Xunit;

namespace Qc.Service.Tests;

/// <summary>Who came in, who went, and who was refused is in the audit log; a typed password never is.</summary>
[Collection(ServiceCollection.Name)]
public sealed class AccessLogTests(ServiceFixture service)
{
    [Fact]
    public async Task Sign_in_refusal_lockout_and_sign_out_are_entries()
    {
        HttpClient administrator = await service.AsAsync(ServiceFixture.Administrator);
        string user = Plant.Unique("lena");
        await (await administrator.PostAsJsonAsync("/api/v1/people", new { user, printedName = "Lena", password = ServiceFixture.Password, roles = new[] { "auditor" } })).JsonAsync(HttpStatusCode.Created);
        using HttpClient client = service.Anonymous();
        await (await client.PostAsJsonAsync("/api/v1/session", new { user, password = ServiceFixture.Password })).JsonAsync();
        await client.DeleteAsync("/api/v1/session");
        const string Typed = "my secret typed too early";
        await (await client.PostAsJsonAsync("/api/v1/session", new { user = Typed, password = Typed })).ProblemAsync(401, "sign-in-needed");
        for (int i = 0; i < 6; i++)
        {
            await (await client.PostAsJsonAsync("/api/v1/session", new { user, password = Typed })).ProblemAsync(401, "sign-in-needed");
        }

        Assert.Equal(
            "person.added session.opened session.closed session.refused session.refused session.refused session.refused session.refused account.locked session.refused",
            await service.SqlAsync($"SELECT string_agg(action, ' ' ORDER BY index) FROM qc.audit_rows WHERE subject_type = 'person' AND subject_id = '{user}'"));
        Assert.Equal(0L, await service.SqlAsync($"SELECT count(*) FROM qc.audit_rows a WHERE a::text LIKE '%{Typed}%'"));
        Assert.DoesNotContain(Typed, service.Log, StringComparison.Ordinal);
    }

    [Fact]
    public async Task Every_refusal_is_an_entry_that_names_who_and_what()
    {
        HttpClient submitter = await service.AsAsync(ServiceFixture.Submitter);
        string lot = Plant.Unique("refused");
        await (await submitter.PostAsJsonAsync($"/api/v1/lots/{lot}/reviews", new { })).ProblemAsync(403, "not-allowed");
        Assert.Equal(
            "person:sam access.refused",
            await service.SqlAsync($"SELECT string_agg(actor || ' ' || action, ',') FROM qc.audit_rows WHERE subject_id = '/api/v1/lots/{lot}/reviews'"));
        using HttpClient invented = service.Anonymous();
        invented.DefaultRequestHeaders.Authorization = new AuthenticationHeaderValue("Bearer", "qc_nobody_00");
        await (await invented.GetAsync($"/api/v1/lots/{lot}")).ProblemAsync(401, "sign-in-needed");
        Assert.Equal(
            "anonymous key.refused",
            await service.SqlAsync($"SELECT string_agg(actor || ' ' || action, ',') FROM qc.audit_rows WHERE subject_id = '/api/v1/lots/{lot}'"));
    }

    [Fact]
    public async Task A_wrong_password_at_a_signature_is_an_entry()
    {
        string product = await Plant.ProductAsync(service);
        string lot = (string)(await Plant.CheckedLotAsync(service, product))["id"]!;
        HttpClient reviewer = await service.AsAsync(ServiceFixture.Reviewer);
        const string Count = "SELECT count(*) FROM qc.audit_rows WHERE action = 'signature.refused' AND actor = 'person:rita'";
        long before = (long)(await service.SqlAsync(Count))!;
        await (await reviewer.PostAsJsonAsync($"/api/v1/lots/{lot}/reviews", new { decision = "reject", reason = "x", password = "not the password" })).ProblemAsync(422, "wrong-password");
        Assert.Equal(before + 1, await service.SqlAsync(Count));
    }
}
