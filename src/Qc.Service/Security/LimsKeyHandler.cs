using System.Security.Claims;
using System.Security.Cryptography;
using System.Text;
using System.Text.Encodings.Web;
using Microsoft.AspNetCore.Authentication;
using Microsoft.EntityFrameworkCore;
using Microsoft.Extensions.Options;
using Qc.Records;
using Qc.Records.People;

namespace Qc.Service.Security;

/// <summary>
/// Bearer keys of a LIMS: "qc_{id}_{secret}". Only the SHA-256 of the secret is stored; the secret has 256 random bits, so
/// a slow hash would add nothing. An unknown, expired, revoked and wrong key are refused alike.
/// </summary>
internal sealed class LimsKeyHandler(
    IOptionsMonitor<AuthenticationSchemeOptions> options, ILoggerFactory logger, UrlEncoder encoder, QcDbContext context, TimeProvider time)
    : AuthenticationHandler<AuthenticationSchemeOptions>(options, logger, encoder)
{
    public const string SchemeName = "lims-key";

    public static (string Id, string Secret, string Text) NewKey(DateTimeOffset at)
    {
        string id = Qc.Records.Ids.New(at).ToLowerInvariant();
        string secret = Convert.ToHexStringLower(RandomNumberGenerator.GetBytes(32));
        return (id, secret, $"qc_{id}_{secret}");
    }

    public static string Hash(string secret) => Convert.ToHexStringLower(SHA256.HashData(Encoding.UTF8.GetBytes(secret)));

    protected override async Task<AuthenticateResult> HandleAuthenticateAsync()
    {
        string? header = Request.Headers.Authorization;
        if (header is null || !header.StartsWith("Bearer ", StringComparison.OrdinalIgnoreCase))
        {
            return AuthenticateResult.NoResult();
        }

        string[] parts = header["Bearer ".Length..].Trim().Split('_');
        if (parts.Length != 3 || parts[0] != "qc")
        {
            return AuthenticateResult.Fail("not a key");
        }

        LimsKey? key = await context.LimsKeys.AsNoTracking().SingleOrDefaultAsync(k => k.Id == parts[1], Context.RequestAborted);
        bool valid = key is not null
            && CryptographicOperations.FixedTimeEquals(Encoding.ASCII.GetBytes(key.SecretSha256), Encoding.ASCII.GetBytes(Hash(parts[2])))
            && (key.ExpiresAt is null || key.ExpiresAt > time.GetUtcNow())
            && !await context.LimsKeyRevocations.AnyAsync(r => r.KeyId == key.Id, Context.RequestAborted);
        if (!valid)
        {
            return AuthenticateResult.Fail("not a valid key");
        }

        var identity = new ClaimsIdentity(
            [
                new Claim(ClaimTypes.Name, key!.Name),
                new Claim(Caller.KeyClaim, key.Id),
                .. key.Scopes.Split(' ', StringSplitOptions.RemoveEmptyEntries).Select(s => new Claim(Caller.ScopeClaim, s)),
            ],
            SchemeName);
        return AuthenticateResult.Success(new AuthenticationTicket(new ClaimsPrincipal(identity), SchemeName));
    }

    protected override Task HandleChallengeAsync(AuthenticationProperties properties)
    {
        Response.Headers.WWWAuthenticate = "Bearer";
        Response.StatusCode = StatusCodes.Status401Unauthorized;
        return Task.CompletedTask;
    }
}
