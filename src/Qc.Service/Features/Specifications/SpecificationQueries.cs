using System.Collections.Immutable;
using System.Text.Json;
using Microsoft.EntityFrameworkCore;
using Qc.Engine.Verdicts;
using Qc.Records;
using Qc.Records.Products;
using Qc.Service.Http;

namespace Qc.Service.Features.Specifications;

/// <summary>Which specification holds when.</summary>
internal static class SpecificationQueries
{
    /// <summary>The version in force at a time: approved, effective by then, not retired by then, the highest such.</summary>
    public static async Task<SpecificationVersion?> InForceAsync(
        this QcDbContext context, string productId, DateTimeOffset at, CancellationToken cancellation) =>
        await context.SpecificationVersions.AsNoTracking()
            .Where(s => s.ProductId == productId)
            .Where(s => context.SpecificationEvents.Any(e =>
                e.SpecificationId == s.Id && e.Kind == SpecificationEvent.Approved && e.EffectiveFrom <= at))
            .Where(s => !context.SpecificationEvents.Any(e =>
                e.SpecificationId == s.Id && e.Kind == SpecificationEvent.Retired && e.EffectiveFrom <= at))
            .OrderByDescending(s => s.Version)
            .FirstOrDefaultAsync(cancellation);

    /// <summary>As the API writes it.</summary>
    public static async Task<SpecificationDto> DtoAsync(this QcDbContext context, SpecificationVersion version, CancellationToken cancellation)
    {
        List<SpecificationEvent> events = await context.SpecificationEvents.AsNoTracking()
            .Where(e => e.SpecificationId == version.Id).ToListAsync(cancellation);
        SpecificationEvent? approved = events.SingleOrDefault(e => e.Kind == SpecificationEvent.Approved);
        bool retired = events.Any(e => e.Kind == SpecificationEvent.Retired);
        return new SpecificationDto
        {
            Version = version.Version,
            State = retired ? "retired" : approved is null ? "draft" : "approved",
            Criteria = Criteria(version),
            Rivals = Rivals(version),
            DraftedAt = version.DraftedAt,
            DraftedBy = version.DraftedBy,
            EffectiveFrom = approved?.EffectiveFrom,
            ApprovedAt = approved?.At,
            ApprovedBy = approved?.By,
        };
    }

    /// <summary>The complete criteria of a version.</summary>
    public static Criteria Criteria(SpecificationVersion version) => JsonSerializer.Deserialize<Criteria>(version.CriteriaJson, Json.Options)!;

    /// <summary>The mix-ups of a version.</summary>
    public static ImmutableArray<NamedRival> Rivals(SpecificationVersion version) =>
        JsonSerializer.Deserialize<ImmutableArray<NamedRival>>(version.RivalsJson, Json.Options);
}
