using System.Buffers.Binary;
using System.Globalization;
using System.Net;
using System.Net.Http.Json;
using System.Security.Cryptography;
using System.Text.Json.Nodes;
using Qc.Service.Features.People;
using Qc.Service.Tests.Support;
using Xunit;

namespace Qc.Service.Tests;

/// <summary>Invitations, passwords, one-time codes, and the end of sessions.</summary>
[Collection(ServiceCollection.Name)]
public sealed class PeopleTests(ServiceFixture service)
{
    [Theory]
    [InlineData("Password2026!")]
    [InlineData("1qaz2wsx3edc")]
    [InlineData("passwordpassword")]
    [InlineData("abcabcabcabc")]
    [InlineData("qwertyuiopas")]
    [InlineData("lkjhgfdsapoi")]
    [InlineData("123456789012")]
    [InlineData("wanda and her dog")]
    public void A_password_that_is_tried_first_is_refused(string password) => Assert.NotNull(CommonPasswords.Obstacle(password, "wanda"));

    [Theory]
    [InlineData("correct horse battery")]
    [InlineData("nine green bottles of solvent")]
    [InlineData("7f0a9c44d1e2b3")]
    public void Any_other_is_taken(string password) => Assert.Null(CommonPasswords.Obstacle(password, "wanda"));

    [Fact]
    public void One_time_codes_of_these_tests_are_those_of_RFC_6238_appendix_B()
    {
        byte[] secret = "12345678901234567890"u8.ToArray();
        Assert.Equal("287082", Code(secret, 59 / 30));
        Assert.Equal("081804", Code(secret, 1111111109 / 30));
        Assert.Equal("353130", Code(secret, 20000000000 / 30));
    }

    [Fact]
    public async Task An_invited_person_signs_in_once_they_choose_a_password_of_their_own()
    {
        string user = Plant.Unique("ina");
        HttpClient administrator = await service.AsAsync(ServiceFixture.Administrator);
        JsonNode invited = await (await administrator.PostAsJsonAsync("/api/v1/people", new { user, printedName = "Ina", roles = new[] { "auditor" } })).JsonAsync(HttpStatusCode.Created);
        string first = (string)invited["firstPassword"]!;
        Assert.Equal(0L, await service.SqlAsync($"SELECT count(*) FROM qc.audit_rows a WHERE a::text LIKE '%{first}%'"));
        using HttpClient client = service.Anonymous();
        await (await client.PostAsJsonAsync("/api/v1/session", new { user, password = first })).ProblemAsync(403, "password-change-needed", "/newPassword");
        await (await client.GetAsync("/api/v1/session")).ProblemAsync(401, "sign-in-needed");
        await (await client.PostAsJsonAsync("/api/v1/session", new { user, password = first, newPassword = "passwordpassword" })).ProblemAsync(422, "invalid-field", "/newPassword");
        await (await client.PostAsJsonAsync("/api/v1/session", new { user, password = first, newPassword = first })).ProblemAsync(422, "invalid-field", "/newPassword");
        await (await client.PostAsJsonAsync("/api/v1/session", new { user, password = first, newPassword = "a password of my own" })).JsonAsync();
        Assert.Equal(HttpStatusCode.OK, (await client.GetAsync("/api/v1/session")).StatusCode);
        await (await service.Anonymous().PostAsJsonAsync("/api/v1/session", new { user, password = first })).ProblemAsync(401, "sign-in-needed");
    }

    [Fact]
    public async Task One_time_codes_are_asked_for_once_confirmed_serve_once_and_recovery_codes_once_each()
    {
        (string user, HttpClient client) = await PersonAsync();
        await (await client.PostAsJsonAsync("/api/v1/session/second-factor", new { password = "wrong wrong wrong" })).ProblemAsync(422, "wrong-password");
        JsonNode begun = await (await client.PostAsJsonAsync("/api/v1/session/second-factor", new { password = ServiceFixture.Password })).JsonAsync();
        byte[] secret = FromBase32((string)begun["key"]!);
        await (await client.PostAsJsonAsync("/api/v1/session/second-factor/confirm", new { code = "not" })).ProblemAsync(422, "invalid-field", "/code");
        JsonNode on = await (await client.PostAsJsonAsync("/api/v1/session/second-factor/confirm", new { code = Code(secret, Step()) })).JsonAsync();
        string[] recovery = [.. on["codes"]!.AsArray().Select(c => (string)c!)];
        Assert.Equal(10, recovery.Distinct().Count());

        Assert.Equal(HttpStatusCode.Unauthorized, await SignIn(null));
        Assert.Equal(HttpStatusCode.Unauthorized, await SignIn("000000x"));
        string code = Code(secret, Step());
        Assert.Equal(HttpStatusCode.OK, await SignIn(code));
        Assert.Equal(HttpStatusCode.Unauthorized, await SignIn(code));
        Assert.Equal(HttpStatusCode.OK, await SignIn(recovery[3]));
        Assert.Equal(HttpStatusCode.Unauthorized, await SignIn(recovery[3]));

        HttpClient administrator = await service.AsAsync(ServiceFixture.Administrator);
        Assert.Equal(HttpStatusCode.NoContent, (await administrator.PostAsJsonAsync($"/api/v1/people/{user}/second-factor-off", new { reason = "Lost the telephone." })).StatusCode);
        Assert.Equal(HttpStatusCode.OK, await SignIn(null));

        async Task<HttpStatusCode> SignIn(string? with)
        {
            using HttpClient stranger = service.Anonymous();
            return (await stranger.PostAsJsonAsync("/api/v1/session", new { user, password = ServiceFixture.Password, code = with })).StatusCode;
        }
    }

    [Fact]
    public async Task Ended_sessions_and_closed_accounts_are_out_with_the_next_request()
    {
        (string user, HttpClient client) = await PersonAsync();
        HttpClient administrator = await service.AsAsync(ServiceFixture.Administrator);
        Assert.Equal(HttpStatusCode.OK, (await client.GetAsync("/api/v1/audit")).StatusCode);
        await (await administrator.PostAsJsonAsync($"/api/v1/people/{user}/end-sessions", new { reason = "" })).ProblemAsync(422, "invalid-field", "/reason");
        Assert.Equal(HttpStatusCode.NoContent, (await administrator.PostAsJsonAsync($"/api/v1/people/{user}/end-sessions", new { reason = "Left the screen open." })).StatusCode);
        await (await client.GetAsync("/api/v1/audit")).ProblemAsync(401, "sign-in-needed");
        await (await client.PostAsJsonAsync("/api/v1/session", new { user, password = ServiceFixture.Password })).JsonAsync();
        Assert.Equal(HttpStatusCode.NoContent, (await administrator.PostAsJsonAsync($"/api/v1/people/{user}/close", new { reason = "Left the plant." })).StatusCode);
        await (await client.GetAsync("/api/v1/audit")).ProblemAsync(401, "sign-in-needed");
        await (await client.PostAsJsonAsync("/api/v1/session", new { user, password = ServiceFixture.Password })).ProblemAsync(401, "sign-in-needed");
        Assert.Equal(
            "sessions.ended person.closed",
            await service.SqlAsync($"SELECT string_agg(action, ' ' ORDER BY index) FROM qc.audit_rows WHERE subject_id = '{user}' AND actor = 'person:adam' AND action <> 'person.added'"));
    }

    [Fact]
    public async Task A_changed_password_ends_the_other_sessions_and_this_one_goes_on()
    {
        (string user, HttpClient here) = await PersonAsync();
        using HttpClient elsewhere = service.Anonymous();
        await (await elsewhere.PostAsJsonAsync("/api/v1/session", new { user, password = ServiceFixture.Password })).JsonAsync();
        await (await here.PostAsJsonAsync("/api/v1/session/password", new { password = ServiceFixture.Password, newPassword = "short" })).ProblemAsync(422, "invalid-field", "/newPassword");
        Assert.Equal(HttpStatusCode.NoContent, (await here.PostAsJsonAsync("/api/v1/session/password", new { password = ServiceFixture.Password, newPassword = "quite another password" })).StatusCode);
        Assert.Equal(HttpStatusCode.OK, (await here.GetAsync("/api/v1/session")).StatusCode);
        await (await elsewhere.GetAsync("/api/v1/session")).ProblemAsync(401, "sign-in-needed");
    }

    private async Task<(string User, HttpClient Client)> PersonAsync()
    {
        string user = Plant.Unique("pat");
        HttpClient administrator = await service.AsAsync(ServiceFixture.Administrator);
        await (await administrator.PostAsJsonAsync("/api/v1/people", new { user, printedName = "Pat", password = ServiceFixture.Password, roles = new[] { "auditor" } })).JsonAsync(HttpStatusCode.Created);
        HttpClient client = service.Anonymous();
        await (await client.PostAsJsonAsync("/api/v1/session", new { user, password = ServiceFixture.Password })).JsonAsync();
        return (user, client);
    }

    private static long Step() => DateTimeOffset.UtcNow.ToUnixTimeSeconds() / 30;

    /// <summary>RFC 4226, 5.3, over the step of RFC 6238.</summary>
    private static string Code(byte[] secret, long step)
    {
        byte[] counter = new byte[8];
        BinaryPrimitives.WriteInt64BigEndian(counter, step);
        byte[] hash = HMACSHA1.HashData(secret, counter);
        int number = BinaryPrimitives.ReadInt32BigEndian(hash.AsSpan(hash[^1] & 15)) & 0x7fffffff;
        return (number % 1_000_000).ToString("D6", CultureInfo.InvariantCulture);
    }

    private static byte[] FromBase32(string text)
    {
        var bytes = new List<byte>();
        int buffer = 0;
        int bits = 0;
        foreach (char c in text.TrimEnd('='))
        {
            buffer = (buffer << 5) | "ABCDEFGHIJKLMNOPQRSTUVWXYZ234567".IndexOf(c, StringComparison.Ordinal);
            bits += 5;
            if (bits >= 8)
            {
                bits -= 8;
                bytes.Add((byte)(buffer >> bits));
                buffer &= (1 << bits) - 1;
            }
        }

        return [.. bytes];
    }
}
