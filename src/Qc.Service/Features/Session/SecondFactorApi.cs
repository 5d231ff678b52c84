using System.Security.Claims;
using System.Text;
using System.Text.Json.Nodes;
using Microsoft.AspNetCore.Identity;
using Qc.Records;
using Qc.Records.Audit;
using Qc.Records.People;
using Qc.Service.Features.People;
using Qc.Service.Hosting;
using Qc.Service.Http;
using Qc.Service.Security;

namespace Qc.Service.Features.Session;

/// <summary>A password entered again.</summary>
public sealed record PasswordAgain
{
    /// <summary>The password.</summary>
    public required string Password { get; init; }
}

/// <summary>A one-time code.</summary>
public sealed record CodeRequest
{
    /// <summary>Six digits.</summary>
    public required string Code { get; init; }
}

/// <summary>A change of one's own password.</summary>
public sealed record PasswordChange
{
    /// <summary>The password until now.</summary>
    public required string Password { get; init; }

    /// <summary>The one from now on.</summary>
    public required string NewPassword { get; init; }
}

/// <summary>A new secret for one-time codes, shown once.</summary>
/// <param name="Key">Secret in base 32, to type.</param>
/// <param name="Uri">The same as an address that authenticator programs read.</param>
public sealed record SecondFactorKey(string Key, string Uri);

/// <summary>Codes that each serve once in place of a one-time code, shown once.</summary>
public sealed record RecoveryCodes(IReadOnlyList<string> Codes);

/// <summary>
/// Each person's own second factor and password. One-time codes are those of RFC 6238 (30 s, six digits, SHA-1, as
/// authenticator programs expect). Every change is an audit entry, and ends the person's other sessions.
/// </summary>
internal static class SecondFactorApi
{
    private const int RecoveryCodeCount = 10;

    public static void MapSecondFactor(this IEndpointRouteBuilder api)
    {
        RouteGroupBuilder group = api.MapGroup("/session").WithTags("Session").RequireAuthorization(Policies.Read).RequireRateLimiting(RateLimits.Strangers);
        group.MapPost("/second-factor", BeginAsync).Accepts<PasswordAgain>("application/json").Produces<SecondFactorKey>().WithProblems(400, 401, 403, 409, 415, 422, 429)
            .WithSummary("A new secret for one-time codes; it is asked for only after it is confirmed");
        group.MapPost("/second-factor/confirm", ConfirmAsync).Accepts<CodeRequest>("application/json").Produces<RecoveryCodes>().WithProblems(400, 401, 409, 415, 422, 429)
            .WithSummary("Turns one-time codes on with a first code; answers recovery codes");
        group.MapPost("/password", ChangePasswordAsync).Accepts<PasswordChange>("application/json").Produces(204).WithProblems(400, 401, 403, 415, 422, 429)
            .WithSummary("Changes one's own password");
    }

    private static async Task<IResult> BeginAsync(
        HttpContext http, UserManager<Person> people, SigningDesk desk, QcDbContext context, QcOptions options, CancellationToken cancellation)
    {
        Outcome<PasswordAgain> body = await JsonBody.ReadAsync<PasswordAgain>(http.Request, cancellation);
        if ((body.Problem ?? await desk.RefuseAsync(http.User.Identity!.Name!, body.Value!.Password)) is { } refused)
        {
            return refused.ToResult();
        }

        Person person = (await people.GetUserAsync(http.User))!;
        if (person.TwoFactorEnabled)
        {
            return Problem.Conflict("second-factor-on", "On already", "One-time codes are on; an administrator can turn them off.").ToResult();
        }

        await using var transaction = await context.Database.BeginTransactionAsync(cancellation);
        await people.ResetAuthenticatorKeyAsync(person);
        await NoteAsync(context, person, "second-factor.begun", cancellation);
        await transaction.CommitAsync(cancellation);
        await RenewAsync(http, person);
        string key = (await people.GetAuthenticatorKeyAsync(person))!;
        string issuer = Uri.EscapeDataString(options.Site);
        return Results.Ok(new SecondFactorKey(key, $"otpauth://totp/{issuer}:{Uri.EscapeDataString(person.UserName!)}?secret={key}&issuer={issuer}&digits=6&period=30"));
    }

    private static async Task<IResult> ConfirmAsync(HttpContext http, UserManager<Person> people, QcDbContext context, CancellationToken cancellation)
    {
        Outcome<CodeRequest> body = await JsonBody.ReadAsync<CodeRequest>(http.Request, cancellation);
        if (body.Problem is { } problem)
        {
            return problem.ToResult();
        }

        Person? person = await people.GetUserAsync(http.User);
        if (person is null || person.TwoFactorEnabled || await people.GetAuthenticatorKeyAsync(person) is null)
        {
            return Problem.Conflict("second-factor-not-begun", "Nothing to confirm", "Ask for a secret first.").ToResult();
        }

        if (!await SecondFactor.IsOneTimeCodeAsync(people, person, body.Value!.Code))
        {
            return Problem.InvalidField("/code", "That is not the code of now; check the clock of your device.").ToResult();
        }

        await using var transaction = await context.Database.BeginTransactionAsync(cancellation);
        await people.SetTwoFactorEnabledAsync(person, true);
        string[] codes = [.. (await people.GenerateNewTwoFactorRecoveryCodesAsync(person, RecoveryCodeCount))!];
        await NoteAsync(context, person, "second-factor.on", cancellation);
        await transaction.CommitAsync(cancellation);
        await RenewAsync(http, person);
        return Results.Ok(new RecoveryCodes(codes));
    }

    private static async Task<IResult> ChangePasswordAsync(
        HttpContext http, UserManager<Person> people, SigningDesk desk, QcDbContext context, CancellationToken cancellation)
    {
        Outcome<PasswordChange> body = await JsonBody.ReadAsync<PasswordChange>(http.Request, cancellation);
        if ((body.Problem ?? await desk.RefuseAsync(http.User.Identity!.Name!, body.Value!.Password)) is { } refused)
        {
            return refused.ToResult();
        }

        Person person = (await people.GetUserAsync(http.User))!;
        if (await ChangeAsync(people, context, person, body.Value!.Password, body.Value.NewPassword, cancellation) is { } problem)
        {
            return problem.ToResult();
        }

        await RenewAsync(http, person);
        return Results.NoContent();
    }

    /// <summary>Changes a password whose old value was checked.</summary>
    public static async Task<Problem?> ChangeAsync(
        UserManager<Person> people, QcDbContext context, Person person, string password, string next, CancellationToken cancellation)
    {
        if (password == next)
        {
            return Problem.InvalidField("/newPassword", "The new password is the old one.");
        }

        await using var transaction = await context.Database.BeginTransactionAsync(cancellation);
        person.MustChangePassword = false;
        IdentityResult changed = await people.ChangePasswordAsync(person, password, next);
        if (!changed.Succeeded)
        {
            return Problem.InvalidField("/newPassword", changed.Errors.First().Description);
        }

        await NoteAsync(context, person, "password.changed", cancellation);
        await transaction.CommitAsync(cancellation);
        return null;
    }

    private static Task NoteAsync(QcDbContext context, Person person, string action, CancellationToken cancellation) =>
        context.SaveWithAuditAsync([new AuditDraft($"person:{person.UserName}", action, "person", person.UserName!)], cancellation);

    /// <summary>The change ended every session of the person; this one goes on.</summary>
    private static Task RenewAsync(HttpContext http, Person person) =>
        http.RequestServices.GetRequiredService<SignInManager<Person>>().RefreshSignInAsync(person);
}
