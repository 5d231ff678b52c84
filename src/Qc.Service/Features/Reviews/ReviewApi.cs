using System.Security.Claims;
using Qc.Service.Features.Lots;
using Qc.Service.Http;
using Qc.Service.Security;

namespace Qc.Service.Features.Reviews;

/// <summary>Route of decisions.</summary>
internal static class ReviewApi
{
    public static void MapReviews(this IEndpointRouteBuilder api) =>
        api.MapPost("/lots/{id}/reviews", DecideAsync).WithTags("Reviews").RequireAuthorization(Policies.Review)
            .Accepts<ReviewRequest>("application/json").Produces<LotDto>(201).WithProblems(400, 401, 403, 404, 409, 412, 415, 422)
            .WithSummary("A person's signed decision on a lot; If-Match guards against a second reviewer");

    private static async Task<IResult> DecideAsync(string id, HttpRequest request, DecideLot decide, ClaimsPrincipal user, CancellationToken cancellation)
    {
        Outcome<ReviewRequest> body = await JsonBody.ReadAsync<ReviewRequest>(request, cancellation);
        if (body.Problem is { } problem)
        {
            return problem.ToResult();
        }

        string? ifMatch = request.Headers.IfMatch.Count > 0 ? request.Headers.IfMatch.ToString() : null;
        Outcome<LotDto> outcome = await decide.RunAsync(id, body.Value!, user.Identity!.Name!, ifMatch, cancellation);
        return outcome.ToResult(lot => Results.Created($"/api/v1/lots/{lot.Id}", lot));
    }
}
