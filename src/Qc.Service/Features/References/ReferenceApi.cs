using System.Security.Claims;
using Qc.Records.Products;
using Qc.Service.Http;
using Qc.Service.Security;

namespace Qc.Service.Features.References;

/// <summary>Routes of reference lots.</summary>
internal static class ReferenceApi
{
    public static void MapReferences(this IEndpointRouteBuilder api)
    {
        RouteGroupBuilder group = api.MapGroup("/products/{code}/reference").WithTags("Reference lots").RequireAuthorization(Policies.Read);
        group.MapPost("/", ProposeAsync).RequireAuthorization(Policies.ManageProducts)
            .Accepts<ReferenceRequest>("application/json").Produces<ReferenceDto>(201).WithProblems(400, 401, 403, 404, 409, 415, 422)
            .WithSummary("Makes a checked lot the product's reference; in force at once where a second person has released the lot");
        group.MapGet("/", async (string code, ManageReferences manage, CancellationToken c) => (await manage.AllAsync(code, c)).ToResult(Results.Ok))
            .Produces<IReadOnlyList<ReferenceDto>>().WithProblems(401, 403, 404).WithSummary("All reference lots, newest first");
        group.MapPost("/{number:int}/release", (string code, int number, HttpRequest request, ManageReferences manage, ClaimsPrincipal user, CancellationToken c) =>
                DecideAsync(code, number, ProductReferenceEvent.Released, request, manage, user, c))
            .RequireAuthorization(Policies.ApproveSpecifications)
            .Accepts<ReferenceSigningRequest>("application/json").Produces<ReferenceDto>().WithProblems(400, 401, 403, 404, 409, 422)
            .WithSummary("Releases a proposed reference, by a second person");
        group.MapPost("/{number:int}/withdraw", (string code, int number, HttpRequest request, ManageReferences manage, ClaimsPrincipal user, CancellationToken c) =>
                DecideAsync(code, number, ProductReferenceEvent.Withdrawn, request, manage, user, c))
            .RequireAuthorization(Policies.ApproveSpecifications)
            .Accepts<ReferenceSigningRequest>("application/json").Produces<ReferenceDto>().WithProblems(400, 401, 403, 404, 409, 422)
            .WithSummary("Withdraws a reference; later lots are judged by the one before, or by prediction");
    }

    private static async Task<IResult> ProposeAsync(
        string code, HttpRequest request, ManageReferences manage, ClaimsPrincipal user, CancellationToken cancellation)
    {
        Outcome<ReferenceRequest> body = await JsonBody.ReadAsync<ReferenceRequest>(request, cancellation);
        if (body.Problem is { } problem)
        {
            return problem.ToResult();
        }

        Outcome<ReferenceDto> outcome = await manage.ProposeAsync(code, body.Value!, Caller.Name(user), cancellation);
        return outcome.ToResult(r => Results.Created($"/api/v1/products/{code}/reference", r));
    }

    private static async Task<IResult> DecideAsync(
        string code, int number, string kind, HttpRequest request, ManageReferences manage, ClaimsPrincipal user, CancellationToken cancellation)
    {
        Outcome<ReferenceSigningRequest> body = await JsonBody.ReadAsync<ReferenceSigningRequest>(request, cancellation);
        return body.Problem is { } problem
            ? problem.ToResult()
            : (await manage.DecideAsync(code, number, kind, body.Value!, user.Identity!.Name!, cancellation)).ToResult(Results.Ok);
    }
}
