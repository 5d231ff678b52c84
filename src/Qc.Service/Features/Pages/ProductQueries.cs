using System.Collections.Immutable;
using System.Text.Json;
using Microsoft.EntityFrameworkCore;
using Qc.Engine.Verdicts;
using Qc.Records;
using Qc.Records.Products;
using Qc.Service.Features.Products;
using Qc.Service.Features.Specifications;
using Qc.Service.Http;

namespace Qc.Service.Features.Pages;

/// <summary>A row of the list of products.</summary>
public sealed record ProductRow(string Code, string Name, string Formula, string Solvent, int? VersionInForce);

/// <summary>A specification version as the page shows it.</summary>
public sealed record VersionView(
    int Version, string State, Criteria Criteria, ImmutableArray<NamedRival> Rivals, string Posted, DateTimeOffset DraftedAt, string DraftedBy,
    DateTimeOffset? EffectiveFrom, DateTimeOffset? ApprovedAt, string? ApprovedBy);

/// <summary>A product with its expected signals and specification versions, newest first.</summary>
public sealed record ProductView(Product Product, ExpectationDto Expectation, IReadOnlyList<VersionView> Versions, int? VersionInForce);

/// <summary>Reads products for the pages.</summary>
public sealed class ProductQueries(QcDbContext context, TimeProvider time)
{
    /// <summary>All products by code.</summary>
    public async Task<IReadOnlyList<ProductRow>> AllAsync(CancellationToken cancellation)
    {
        var rows = new List<ProductRow>();
        foreach (Product product in await context.Products.AsNoTracking().OrderBy(p => p.Code).ToListAsync(cancellation))
        {
            SpecificationVersion? inForce = await context.InForceAsync(product.Id, time.GetUtcNow(), cancellation);
            rows.Add(new ProductRow(product.Code, product.Name, product.Formula, product.Solvent, inForce?.Version));
        }

        return rows;
    }

    /// <summary>A product, or null where there is none.</summary>
    public async Task<ProductView?> OneAsync(string code, CancellationToken cancellation)
    {
        Product? product = await context.Products.AsNoTracking().SingleOrDefaultAsync(p => p.Code == code, cancellation);
        if (product is null)
        {
            return null;
        }

        List<SpecificationVersion> versions = await context.SpecificationVersions.AsNoTracking()
            .Where(s => s.ProductId == product.Id).OrderByDescending(s => s.Version).ToListAsync(cancellation);
        SpecificationVersion? inForce = await context.InForceAsync(product.Id, time.GetUtcNow(), cancellation);
        var views = new List<VersionView>();
        foreach (SpecificationVersion version in versions)
        {
            SpecificationDto dto = await context.DtoAsync(version, cancellation);
            views.Add(new VersionView(
                version.Version, dto.State, dto.Criteria, dto.Rivals, version.PostedJson, dto.DraftedAt, dto.DraftedBy, dto.EffectiveFrom,
                dto.ApprovedAt, dto.ApprovedBy));
        }

        return new ProductView(
            product, JsonSerializer.Deserialize<ExpectationDto>(product.ExpectationJson, Json.Options)!, views, inForce?.Version);
    }
}
