using System.Security.Claims;
using Microsoft.EntityFrameworkCore;
using Qc.Records;
using Qc.Service.Http;
using Qc.Service.Security;

namespace Qc.Service.Features.People;

/// <summary>Routes of accounts and keys.</summary>
internal static class PeopleApi
{
    public static void MapPeople(this IEndpointRouteBuilder api)
    {
        RouteGroupBuilder group = api.MapGroup("").WithTags("People").RequireAuthorization(Policies.Administer);
        group.MapPost("/people", AddAsync).Accepts<PersonRequest>("application/json").Produces(201).WithProblems(400, 401, 403, 415, 422)
            .WithSummary("Makes an account; without a password, an invitation whose first password is shown once");
        group.MapPost("/people/{user}/end-sessions", (string user, HttpRequest request, ManagePeople manage, ClaimsPrincipal who, CancellationToken c) => EndAsync(user, false, false, request, manage, who, c))
            .Accepts<EndPersonRequest>("application/json").Produces(204).WithProblems(400, 401, 403, 404, 415, 422).WithSummary("Ends every session of a person");
        group.MapPost("/people/{user}/close", (string user, HttpRequest request, ManagePeople manage, ClaimsPrincipal who, CancellationToken c) => EndAsync(user, true, false, request, manage, who, c))
            .Accepts<EndPersonRequest>("application/json").Produces(204).WithProblems(400, 401, 403, 404, 415, 422).WithSummary("Closes an account; it is never removed or given to another");
        group.MapPost("/people/{user}/second-factor-off", (string user, HttpRequest request, ManagePeople manage, ClaimsPrincipal who, CancellationToken c) => EndAsync(user, false, true, request, manage, who, c))
            .Accepts<EndPersonRequest>("application/json").Produces(204).WithProblems(400, 401, 403, 404, 415, 422).WithSummary("Turns a person's one-time codes off");
        group.MapPost("/keys", AddKeyAsync).Accepts<KeyRequest>("application/json").Produces<KeyDto>(201).WithProblems(400, 401, 403, 415, 422)
            .WithSummary("Makes a LIMS key; its text is shown once");
        group.MapGet("/keys", ListKeysAsync).Produces<IReadOnlyList<KeyDto>>().WithProblems(401, 403).WithSummary("Lists LIMS keys");
        group.MapDelete("/keys/{id}", RevokeAsync).Produces(204).WithProblems(401, 403, 404).WithSummary("Revokes a LIMS key");
        api.MapPost("/set-up", SetUpAsync).AllowAnonymous().WithTags("People").Accepts<SetUpRequest>("application/json").Produces(201)
            .WithProblems(400, 409, 415, 422).WithSummary("Makes the first administrator, once");
    }

    private static async Task<IResult> AddAsync(HttpRequest request, ManagePeople manage, ClaimsPrincipal user, CancellationToken cancellation)
    {
        Outcome<PersonRequest> body = await JsonBody.ReadAsync<PersonRequest>(request, cancellation);
        if (body.Problem is { } problem)
        {
            return problem.ToResult();
        }

        return body.Value!.Password is null
            ? (await manage.InviteAsync(body.Value, Caller.Name(user), cancellation)).ToResult(i => Results.Json(i, statusCode: 201))
            : (await manage.AddAsync(body.Value, Caller.Name(user), cancellation)).ToResult(p => Results.Json(new { user = p.UserName }, statusCode: 201));
    }

    private static async Task<IResult> EndAsync(
        string user, bool close, bool secondFactorOff, HttpRequest request, ManagePeople manage, ClaimsPrincipal who, CancellationToken cancellation)
    {
        Outcome<EndPersonRequest> body = await JsonBody.ReadAsync<EndPersonRequest>(request, cancellation);
        return body.Problem is { } problem
            ? problem.ToResult()
            : (await manage.EndAsync(user, close, secondFactorOff, body.Value!.Reason, Caller.Name(who), cancellation)).ToResult(_ => Results.NoContent());
    }

    private static async Task<IResult> AddKeyAsync(HttpRequest request, ManagePeople manage, ClaimsPrincipal user, CancellationToken cancellation)
    {
        Outcome<KeyRequest> body = await JsonBody.ReadAsync<KeyRequest>(request, cancellation);
        return body.Problem is { } problem
            ? problem.ToResult()
            : (await manage.AddKeyAsync(body.Value!, Caller.Name(user), cancellation)).ToResult(k => Results.Created($"/api/v1/keys/{k.Id}", k));
    }

    private static async Task<IResult> ListKeysAsync(QcDbContext context, CancellationToken cancellation) =>
        Results.Ok((await context.LimsKeys.AsNoTracking().OrderBy(k => k.Id).ToListAsync(cancellation))
            .Select(k => new KeyDto(k.Id, k.Name, k.Scopes.Split(' '), k.ExpiresAt, null)));

    private static async Task<IResult> RevokeAsync(string id, ManagePeople manage, ClaimsPrincipal user, CancellationToken cancellation) =>
        (await manage.RevokeKeyAsync(id, Caller.Name(user), cancellation)).ToResult(_ => Results.NoContent());

    private static async Task<IResult> SetUpAsync(HttpRequest request, ManagePeople manage, CancellationToken cancellation)
    {
        Outcome<SetUpRequest> body = await JsonBody.ReadAsync<SetUpRequest>(request, cancellation);
        if (body.Problem is { } problem)
        {
            return problem.ToResult();
        }

        if (await manage.AnybodyAsync(cancellation))
        {
            return Problem.Conflict("set-up-done", "Set up already", "The first administrator exists; ask them for an account.").ToResult();
        }

        var person = new PersonRequest
        {
            User = body.Value!.User,
            PrintedName = body.Value.PrintedName,
            Password = body.Value.Password,
            Roles = [Records.People.Roles.Administrator],
        };
        return (await manage.AddAsync(person, "service", cancellation)).ToResult(p => Results.Json(new { user = p.UserName }, statusCode: 201));
    }
}

/// <summary>The first administrator.</summary>
public sealed record SetUpRequest
{
    /// <summary>User name.</summary>
    public required string User { get; init; }

    /// <summary>Name as printed.</summary>
    public required string PrintedName { get; init; }

    /// <summary>Password.</summary>
    public required string Password { get; init; }
}
