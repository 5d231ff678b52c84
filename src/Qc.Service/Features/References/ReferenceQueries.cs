using System.Text.Json;
using Microsoft.EntityFrameworkCore;
using Qc.Engine.Verdicts;
using Qc.Records;
using Qc.Records.Products;
using Qc.Service.Http;

namespace Qc.Service.Features.References;

/// <summary>Which reference lot holds when.</summary>
internal static class ReferenceQueries
{
    /// <summary>The reference in force at a time: released by then, not withdrawn by then, the highest such.</summary>
    public static async Task<ProductReference?> ReferenceInForceAsync(
        this QcDbContext context, string productId, DateTimeOffset at, CancellationToken cancellation) =>
        await context.ProductReferences.AsNoTracking()
            .Where(r => r.ProductId == productId)
            .Where(r => context.ProductReferenceEvents.Any(e =>
                e.ReferenceId == r.Id && e.Kind == ProductReferenceEvent.Released && e.At <= at))
            .Where(r => !context.ProductReferenceEvents.Any(e =>
                e.ReferenceId == r.Id && e.Kind == ProductReferenceEvent.Withdrawn && e.At <= at))
            .OrderByDescending(r => r.Number)
            .FirstOrDefaultAsync(cancellation);

    /// <summary>As the engine takes it.</summary>
    public static async Task<ReferenceLot> ReferenceLotAsync(this QcDbContext context, ProductReference reference, CancellationToken cancellation) =>
        new(
            await context.Lots.Where(l => l.Id == reference.LotId).Select(l => l.LotNumber).SingleAsync(cancellation),
            Constants(reference));

    /// <summary>All references of a product, newest first, as the API writes them.</summary>
    public static async Task<IReadOnlyList<ReferenceDto>> ReferencesAsync(
        this QcDbContext context, string productId, DateTimeOffset at, CancellationToken cancellation)
    {
        ProductReference? inForce = await context.ReferenceInForceAsync(productId, at, cancellation);
        var references = await (
            from r in context.ProductReferences.AsNoTracking()
            join l in context.Lots on r.LotId equals l.Id
            where r.ProductId == productId
            orderby r.Number descending
            select new { Reference = r, l.LotNumber }).ToListAsync(cancellation);
        List<ProductReferenceEvent> events = await (
            from e in context.ProductReferenceEvents.AsNoTracking()
            join r in context.ProductReferences on e.ReferenceId equals r.Id
            where r.ProductId == productId
            select e).ToListAsync(cancellation);
        return
        [
            .. references.Select(r =>
            {
                ProductReferenceEvent? released = events.SingleOrDefault(e => e.ReferenceId == r.Reference.Id && e.Kind == ProductReferenceEvent.Released);
                bool withdrawn = events.Any(e => e.ReferenceId == r.Reference.Id && e.Kind == ProductReferenceEvent.Withdrawn);
                return new ReferenceDto
                {
                    Number = r.Reference.Number,
                    State = withdrawn ? "withdrawn" : released is null ? "proposed" : "released",
                    InForce = r.Reference.Id == inForce?.Id,
                    Lot = r.Reference.LotId,
                    LotNumber = r.LotNumber,
                    Constants = Constants(r.Reference),
                    ProposedAt = r.Reference.ProposedAt,
                    ProposedBy = r.Reference.ProposedBy,
                    ReleasedAt = released?.At,
                    ReleasedBy = released?.By,
                };
            }),
        ];
    }

    private static FittedConstants Constants(ProductReference reference) =>
        JsonSerializer.Deserialize<FittedConstants>(reference.ConstantsJson, Json.Options)!;
}
