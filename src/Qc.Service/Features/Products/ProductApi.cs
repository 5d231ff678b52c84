using System.Security.Claims;
using Qc.Chemistry;
using Qc.Service.Http;
using Qc.Service.Security;

namespace Qc.Service.Features.Products;

/// <summary>Routes of products.</summary>
internal static class ProductApi
{
    public static void MapProducts(this IEndpointRouteBuilder api)
    {
        RouteGroupBuilder group = api.MapGroup("/products").WithTags("Products").RequireAuthorization(Policies.Read);
        group.MapPost("/", CreateAsync).RequireAuthorization(Policies.ManageProducts)
            .Accepts<ProductRequest>("application/json").Produces<ProductDto>(201).WithProblems(400, 401, 403, 409, 415, 422)
            .WithSummary("Sets up a product from its structure");
        group.MapGet("/", (ReadProduct read, CancellationToken c) => read.AllAsync(c)).Produces<IReadOnlyList<ProductDto>>()
            .WithProblems(401, 403).WithSummary("Lists the products");
        group.MapGet("/{code}", async (string code, ReadProduct read, CancellationToken c) => (await read.OneAsync(code, c)).ToResult(Results.Ok))
            .Produces<ProductDto>().WithProblems(401, 403, 404).WithSummary("A product and its specification in force");
        group.MapGet("/{code}/drawing.svg", DrawAsync).Produces(200, contentType: "image/svg+xml").WithProblems(401, 403, 404)
            .WithSummary("The structure with numbered atoms, as SVG");
        group.MapGet("/{code}/specificity", () => Problem.NotBuilt("The specificity report of a method is not built yet.").ToResult())
            .ExcludeFromDescription();
    }

    private static async Task<IResult> CreateAsync(HttpRequest request, CreateProduct create, ClaimsPrincipal user, CancellationToken cancellation)
    {
        Outcome<ProductRequest> body = await JsonBody.ReadAsync<ProductRequest>(request, cancellation);
        if (body.Problem is { } problem)
        {
            return problem.ToResult();
        }

        Outcome<ProductDto> outcome = await create.RunAsync(body.Value!, Caller.Name(user), cancellation);
        return outcome.ToResult(product => Results.Created($"/api/v1/products/{product.Code}", product));
    }

    private static async Task<IResult> DrawAsync(
        string code, ReadProduct read, IStructureReader structures, CancellationToken cancellation, int width = 420, int height = 300)
    {
        Outcome<ProductDto> product = await read.OneAsync(code, cancellation);
        return product.ToResult(p => Results.Text(
            structures.DrawSvg(p.Smiles, Math.Clamp(width, 50, 2000), Math.Clamp(height, 50, 2000), numbered: true), "image/svg+xml"));
    }
}
