using System.Text.Json;
using Microsoft.EntityFrameworkCore;
using Qc.Engine.Verdicts;
using Qc.Records;
using Qc.Records.Lots;
using Qc.Records.Products;
using Qc.Records.Reviews;
using Qc.Service.Features.Reviews;
using Qc.Service.Http;

namespace Qc.Service.Features.Pages;

/// <summary>What the list of waiting lots is narrowed to; kept in the address, so that it survives a reload.</summary>
public sealed record WaitingFilter(string? Product, string? State, string? Verdict);

/// <summary>A row of a list of lots.</summary>
public sealed record LotRow(
    string Id, string Product, string ProductName, string LotNumber, int Sequence, string State, string? Verdict, bool Unsuitable,
    string? Summary, DateTimeOffset SubmittedAt, double? FrequencyMHz);

/// <summary>Lots that wait for a decision, oldest first.</summary>
/// <param name="Rows">The rows shown.</param>
/// <param name="Total">How many there are that meet the filter.</param>
/// <param name="Flagged">How many wait with a flag, filter aside.</param>
/// <param name="Passed">How many wait with a pass.</param>
/// <param name="Unreadable">How many wait because they could not be read.</param>
/// <param name="BeingChecked">How many are not yet checked.</param>
/// <param name="Products">Codes of products with waiting lots.</param>
public sealed record WaitingLots(
    IReadOnlyList<LotRow> Rows, int Total, int Flagged, int Passed, int Unreadable, int BeingChecked, IReadOnlyList<string> Products);

/// <summary>A spectrum of a lot, without its bytes.</summary>
public sealed record SpectrumRow(int Number, string Name, string Format, string Sha256);

/// <summary>Everything the page of a lot shows.</summary>
public sealed record LotView(
    Lot Lot, Product Product, int SpecificationVersion, string State, Computation? Computation, CheckReport? Report,
    IReadOnlyList<SpectrumRow> Spectra, IReadOnlyList<LotEvent> Events, IReadOnlyList<(Review Review, Signature Signature)> Reviews,
    string? CertificateNumber)
{
    /// <summary>Entity tag of the lot as the API gives it.</summary>
    public string Tag => DecideLot.Tag(State, Reviews.Count);
}

/// <summary>Reads lots for the pages.</summary>
public sealed class LotQueries(QcDbContext context)
{
    /// <summary>Rows shown of what waits; the rest follows as these are decided.</summary>
    public const int WaitingShown = 100;

    private const int PageSize = 50;

    /// <summary>What waits for a decision: checked and unreadable lots.</summary>
    public async Task<WaitingLots> WaitingAsync(WaitingFilter filter, CancellationToken cancellation)
    {
        var open = (await Listed().Where(x => x.State == LotState.Checked || x.State == LotState.Unreadable)
            .Select(x => new { x.Lot.Id, x.Product.Code, x.State, x.Verdict }).ToListAsync(cancellation)).ToList();
        IQueryable<Listing> query = Listed().Where(x => x.State == LotState.Checked || x.State == LotState.Unreadable);
        if (!string.IsNullOrEmpty(filter.Product))
        {
            query = query.Where(x => x.Product.Code == filter.Product);
        }

        if (!string.IsNullOrEmpty(filter.State))
        {
            query = query.Where(x => x.State == filter.State);
        }

        if (!string.IsNullOrEmpty(filter.Verdict))
        {
            query = query.Where(x => x.Verdict == filter.Verdict);
        }

        List<Listing> rows = await query.OrderBy(x => x.Lot.SubmittedAt).ThenBy(x => x.Lot.Id).Take(WaitingShown).ToListAsync(cancellation);
        int beingChecked = await Listed().CountAsync(x => x.State == LotState.Queued || x.State == LotState.Checking, cancellation);
        return new WaitingLots(
            [.. rows.Select(Row)],
            await query.CountAsync(cancellation),
            open.Count(x => x.Verdict == "flag"),
            open.Count(x => x.Verdict == "pass"),
            open.Count(x => x.State == LotState.Unreadable),
            beingChecked,
            [.. open.Select(x => x.Code).Distinct().Order(StringComparer.Ordinal)]);
    }

    /// <summary>All lots, newest first, from a lot on; with the id to go on after, where there are more.</summary>
    public async Task<(IReadOnlyList<LotRow> Rows, string? Next)> NewestAsync(string? after, CancellationToken cancellation)
    {
        IQueryable<Listing> query = Listed();
        DateTimeOffset? from = await context.Lots.Where(l => l.Id == after).Select(l => (DateTimeOffset?)l.SubmittedAt).SingleOrDefaultAsync(cancellation);
        if (from is { } at)
        {
            query = query.Where(x => x.Lot.SubmittedAt < at || (x.Lot.SubmittedAt == at && string.Compare(x.Lot.Id, after) < 0));
        }

        List<Listing> rows = await query.OrderByDescending(x => x.Lot.SubmittedAt).ThenByDescending(x => x.Lot.Id).Take(PageSize + 1).ToListAsync(cancellation);
        return ([.. rows.Take(PageSize).Select(Row)], rows.Count > PageSize ? rows[PageSize - 1].Lot.Id : null);
    }

    /// <summary>A lot, or null where there is none.</summary>
    public async Task<LotView?> OneAsync(string id, CancellationToken cancellation)
    {
        var found = await (
            from l in context.Lots.AsNoTracking()
            join p in context.Products on l.ProductId equals p.Id
            join s in context.SpecificationVersions on l.SpecificationId equals s.Id
            where l.Id == id
            select new { Lot = l, Product = p, s.Version }).SingleOrDefaultAsync(cancellation);
        if (found is null)
        {
            return null;
        }

        Computation? computation = await context.Computations.AsNoTracking().Where(c => c.LotId == id).OrderByDescending(c => c.Number).FirstOrDefaultAsync(cancellation);
        List<LotEvent> events = await context.LotEvents.AsNoTracking().Where(e => e.LotId == id).OrderBy(e => e.Id).ToListAsync(cancellation);
        List<SpectrumRow> spectra = await context.LotSpectra.Where(s => s.LotId == id).OrderBy(s => s.Number)
            .Select(s => new SpectrumRow(s.Number, s.Name, s.Format, s.Sha256)).ToListAsync(cancellation);
        var reviews = await (
            from r in context.Reviews.AsNoTracking()
            join s in context.Signatures on r.SignatureId equals s.Id
            where r.LotId == id
            orderby r.Number
            select new { r, s }).ToListAsync(cancellation);
        string? certificate = await context.Certificates.Where(c => c.LotId == id).OrderByDescending(c => c.Version).Select(c => c.Number).FirstOrDefaultAsync(cancellation);
        return new LotView(
            found.Lot, found.Product, found.Version, events[^1].State, computation,
            computation is null ? null : JsonSerializer.Deserialize<CheckReport>(computation.ReportJson, Json.Options),
            spectra, events, [.. reviews.Select(x => (x.r, x.s))], certificate);
    }

    private IQueryable<Listing> Listed() =>
        from l in context.Lots.AsNoTracking()
        join p in context.Products on l.ProductId equals p.Id
        let c = context.Computations.Where(c => c.LotId == l.Id).OrderByDescending(c => c.Number).FirstOrDefault()
        select new Listing
        {
            Lot = l,
            Product = p,
            State = context.LotEvents.Where(e => e.LotId == l.Id).OrderByDescending(e => e.Id).Select(e => e.State).First(),
            Verdict = c.Verdict,
            Unsuitable = (bool?)c.Unsuitable,
            Summary = c.Summary,
            ReportJson = c.ReportJson,
        };

    private static LotRow Row(Listing x) => new(
        x.Lot.Id, x.Product.Code, x.Product.Name, x.Lot.LotNumber, x.Lot.Sequence, x.State, x.Verdict, x.Unsuitable == true, x.Summary,
        x.Lot.SubmittedAt, Frequency(x.ReportJson));

    /// <summary>The field of the first spectrum that has one; read without building the whole report.</summary>
    private static double? Frequency(string? reportJson)
    {
        if (reportJson is null)
        {
            return null;
        }

        using JsonDocument report = JsonDocument.Parse(reportJson);
        return report.RootElement.TryGetProperty("spectra", out JsonElement spectra)
            ? spectra.EnumerateArray()
                .Select(s => s.TryGetProperty("frequencyMHz", out JsonElement f) && f.ValueKind == JsonValueKind.Number ? f.GetDouble() : (double?)null)
                .FirstOrDefault(f => f is not null)
            : null;
    }

    private sealed class Listing
    {
        public required Lot Lot { get; init; }

        public required Product Product { get; init; }

        public required string State { get; init; }

        public string? Verdict { get; init; }

        public bool? Unsuitable { get; init; }

        public string? Summary { get; init; }

        public string? ReportJson { get; init; }
    }
}
