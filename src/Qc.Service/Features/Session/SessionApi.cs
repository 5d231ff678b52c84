using Microsoft.AspNetCore.Identity;
using Qc.Records;
using Qc.Records.People;
using Qc.Service.Http;
using Qc.Service.Security;

namespace Qc.Service.Features.Session;

/// <summary>Body of POST /api/v1/session.</summary>
public sealed record SessionRequest
{
    /// <summary>User name.</summary>
    public required string User { get; init; }

    /// <summary>Password.</summary>
    public required string Password { get; init; }

    /// <summary>One-time or recovery code, where the account has a second factor.</summary>
    public string? Code { get; init; }

    /// <summary>A password of the person's own, where the first one must be changed.</summary>
    public string? NewPassword { get; init; }
}

/// <summary>Who is signed in.</summary>
public sealed record SessionDto(string User, string PrintedName, IReadOnlyList<string> Roles);

/// <summary>Signing in and out.</summary>
internal static class SessionApi
{
    public static void MapSession(this IEndpointRouteBuilder api)
    {
        RouteGroupBuilder group = api.MapGroup("/session").WithTags("Session");
        group.MapPost("/", SignInAsync).AllowAnonymous().Accepts<SessionRequest>("application/json").Produces<SessionDto>()
            .WithProblems(400, 401, 403, 415, 422, 429).RequireRateLimiting(RateLimits.Strangers).WithSummary("Signs a person in (cookie)");
        group.MapGet("/", WhoAsync).RequireAuthorization().Produces<SessionDto>().WithProblems(401).WithSummary("Who is signed in");
        group.MapDelete("/", SignOutAsync).AllowAnonymous().Produces(204).WithSummary("Signs out");
    }

    private static async Task<IResult> SignInAsync(
        HttpContext http, SignInManager<Person> signIn, UserManager<Person> people, AccessLog log, QcDbContext context, CancellationToken cancellation)
    {
        Outcome<SessionRequest> body = await JsonBody.ReadAsync<SessionRequest>(http.Request, cancellation);
        if (body.Problem is { } problem)
        {
            return problem.ToResult();
        }

        SessionRequest session = body.Value!;
        Person? person = await people.FindByNameAsync(session.User);
        if (person is null)
        {
            _ = people.PasswordHasher.HashPassword(new Person { PrintedName = "" }, session.Password); // An unknown name must not answer sooner.

            // What was typed as a name may be a password; it is not written down.
            await log.NoteAsync(http, AccessLog.Nobody, "session.refused", "person", "unknown", "There is no such account.");
            return Refused();
        }

        bool wasLocked = await people.IsLockedOutAsync(person);
        SignInResult result = person.IsActive ? await signIn.CheckPasswordSignInAsync(person, session.Password, lockoutOnFailure: true) : SignInResult.Failed;
        bool isCodeWrong = result.Succeeded && person.TwoFactorEnabled && !await SecondFactor.OpensAsync(people, person, session.Code);
        if (isCodeWrong)
        {
            await people.AccessFailedAsync(person);
            result = await people.IsLockedOutAsync(person) ? SignInResult.LockedOut : SignInResult.Failed;
        }

        if (!result.Succeeded)
        {
            string why = !person.IsActive ? "The account is closed." : wasLocked ? "The account is locked." : isCodeWrong ? "The one-time code is missing or wrong." : "The password is wrong.";
            await log.NoteAsync(http, AccessLog.Nobody, "session.refused", "person", person.UserName!, why);
            if (result.IsLockedOut && !wasLocked)
            {
                await log.NoteAsync(http, AccessLog.Nobody, "account.locked", "person", person.UserName!, "Several wrong passwords one after the other.");
            }

            return Refused();
        }

        await people.ResetAccessFailedCountAsync(person);
        if (person.MustChangePassword)
        {
            Problem? unchanged = session.NewPassword is null
                ? new Problem("/problems/password-change-needed", "A password of your own is needed", 403, "The first password serves once: send newPassword with it.", [new FieldError("/newPassword", "Choose a password of your own.")])
                : await SecondFactorApi.ChangeAsync(people, context, person, session.Password, session.NewPassword, cancellation);
            if (unchanged is not null)
            {
                return unchanged.ToResult();
            }
        }

        await signIn.SignInAsync(person, isPersistent: false);
        await log.NoteAsync(http, $"person:{person.UserName}", "session.opened", "person", person.UserName!);
        return Results.Ok(new SessionDto(person.UserName!, person.PrintedName, [.. await people.GetRolesAsync(person)]));
    }

    /// <summary>The same words for an unknown name, a wrong password and a locked account: they reveal nothing.</summary>
    private static IResult Refused() =>
        Problem.SignInNeeded("The user name, the password or the one-time code is wrong, or the account is locked for a while after several wrong passwords.").ToResult();

    private static async Task<IResult> WhoAsync(HttpContext http, UserManager<Person> people)
    {
        Person? person = await people.GetUserAsync(http.User);
        return person is null
            ? Problem.SignInNeeded("A key is not a person.").ToResult()
            : Results.Ok(new SessionDto(person.UserName!, person.PrintedName, [.. await people.GetRolesAsync(person)]));
    }

    private static async Task<IResult> SignOutAsync(HttpContext http, SignInManager<Person> signIn, AccessLog log)
    {
        if (Caller.IsPerson(http.User))
        {
            await log.NoteAsync(http, Caller.Name(http.User), "session.closed", "person", http.User.Identity!.Name!);
        }

        await signIn.SignOutAsync();
        return Results.NoContent();
    }
}
