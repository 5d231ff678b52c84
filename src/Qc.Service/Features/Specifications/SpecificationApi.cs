using System.Security.Claims;
using Microsoft.EntityFrameworkCore;
using Qc.Records;
using Qc.Service.Http;
using Qc.Service.Security;

namespace Qc.Service.Features.Specifications;

/// <summary>Routes of specifications.</summary>
internal static class SpecificationApi
{
    public static void MapSpecifications(this IEndpointRouteBuilder api)
    {
        RouteGroupBuilder group = api.MapGroup("/products/{code}/specifications").WithTags("Specifications").RequireAuthorization(Policies.Read);
        group.MapPost("/", DraftAsync).RequireAuthorization(Policies.ManageProducts)
            .Accepts<SpecificationRequest>("application/json").Produces<SpecificationDto>(201).WithProblems(400, 401, 403, 404, 409, 415, 422)
            .WithSummary("Drafts a version; {} takes every default");
        group.MapGet("/", ListAsync).Produces<IReadOnlyList<SpecificationDto>>().WithProblems(401, 403, 404).WithSummary("All versions, newest first");
        group.MapPost("/{version:int}/approve", ApproveAsync).RequireAuthorization(Policies.ApproveSpecifications)
            .Accepts<ApprovalRequest>(true, "application/json").Produces<SpecificationDto>().WithProblems(400, 401, 403, 404, 409, 422)
            .WithSummary("Approves a draft, by a second person, signed with the password");
    }

    private static async Task<IResult> DraftAsync(
        string code, HttpRequest request, DraftSpecification draft, ClaimsPrincipal user, CancellationToken cancellation)
    {
        Outcome<SpecificationRequest> body = await JsonBody.ReadAsync<SpecificationRequest>(request, cancellation);
        if (body.Problem is { } problem)
        {
            return problem.ToResult();
        }

        Outcome<SpecificationDto> outcome = await draft.RunAsync(code, body.Value!, Caller.Name(user), cancellation);
        return outcome.ToResult(s => Results.Created($"/api/v1/products/{code}/specifications", s));
    }

    private static async Task<IResult> ListAsync(string code, QcDbContext context, CancellationToken cancellation)
    {
        if (!await context.Products.AnyAsync(p => p.Code == code, cancellation))
        {
            return Problem.NotFound("product").ToResult();
        }

        var versions = await (
            from s in context.SpecificationVersions.AsNoTracking()
            join p in context.Products on s.ProductId equals p.Id
            where p.Code == code
            orderby s.Version descending
            select s).ToListAsync(cancellation);
        var answers = new List<SpecificationDto>();
        foreach (var version in versions)
        {
            answers.Add(await context.DtoAsync(version, cancellation));
        }

        return Results.Ok(answers);
    }

    private static async Task<IResult> ApproveAsync(
        string code, int version, HttpRequest request, ApproveSpecification approve, ClaimsPrincipal user, CancellationToken cancellation)
    {
        ApprovalRequest approval = new();
        if (request.ContentLength is > 0 || request.HasJsonContentType())
        {
            Outcome<ApprovalRequest> body = await JsonBody.ReadAsync<ApprovalRequest>(request, cancellation);
            if (body.Problem is { } problem)
            {
                return problem.ToResult();
            }

            approval = body.Value!;
        }

        Outcome<SpecificationDto> outcome = await approve.RunAsync(code, version, approval, user.Identity!.Name!, cancellation);
        return outcome.ToResult(Results.Ok);
    }
}
