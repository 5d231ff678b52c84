using System.Globalization;
using System.Text;
using Microsoft.EntityFrameworkCore;
using Qc.Records;
using Qc.Records.Lots;
using Qc.Records.Products;
using Qc.Records.Reviews;
using Qc.Service.Features.Specifications;
using Qc.Service.Http;

namespace Qc.Service.Features.Lots;

/// <summary>Filters of the list of lots.</summary>
public sealed record LotFilter(string? Product, string? State, string? Verdict, DateTimeOffset? From, DateTimeOffset? To, string? Cursor);

/// <summary>Reads lots.</summary>
public sealed class ReadLots(QcDbContext context)
{
    private const int PageSize = 50;

    /// <summary>One lot with everything found.</summary>
    public async Task<Outcome<LotDto>> OneAsync(string id, CancellationToken cancellation)
    {
        var found = await (
            from l in context.Lots.AsNoTracking()
            join p in context.Products on l.ProductId equals p.Id
            join s in context.SpecificationVersions on l.SpecificationId equals s.Id
            where l.Id == id
            select new { Lot = l, p.Code, s.Version }).SingleOrDefaultAsync(cancellation);
        if (found is null)
        {
            return Problem.NotFound("lot");
        }

        string state = await StateAsync(id, cancellation);
        Computation? computation = await context.Computations.AsNoTracking().Where(c => c.LotId == id).OrderByDescending(c => c.Number).FirstOrDefaultAsync(cancellation);
        List<LotSpectrum> spectra = await context.LotSpectra.AsNoTracking().Where(s => s.LotId == id).OrderBy(s => s.Number)
            .Select(s => new LotSpectrum { LotId = s.LotId, Number = s.Number, Name = s.Name, Format = s.Format, Sha256 = s.Sha256, Bytes = Array.Empty<byte>() })
            .ToListAsync(cancellation);
        return LotMapping.Dto(found.Lot, found.Code, found.Version, state, computation, spectra, await ReviewsAsync(id, cancellation));
    }

    /// <summary>Current state of a lot.</summary>
    public Task<string> StateAsync(string id, CancellationToken cancellation) =>
        context.LotEvents.AsNoTracking().Where(e => e.LotId == id).OrderByDescending(e => e.Id).Select(e => e.State).FirstAsync(cancellation);

    /// <summary>Whether a lot is still being worked on.</summary>
    public async Task<bool> IsPendingAsync(string id, CancellationToken cancellation)
    {
        string state = await StateAsync(id, cancellation);
        return state is LotState.Queued or LotState.Checking || (state == LotState.Checked && await ReleasesItselfAsync(id, cancellation));
    }

    /// <summary>A passed lot whose specification lets it go without a reviewer is "checked" for a moment only.</summary>
    private async Task<bool> ReleasesItselfAsync(string id, CancellationToken cancellation)
    {
        SpecificationVersion? specification = await (
            from l in context.Lots.AsNoTracking()
            join c in context.Computations on l.Id equals c.LotId
            join s in context.SpecificationVersions on l.SpecificationId equals s.Id
            where l.Id == id && c.Verdict == "pass"
            select s).FirstOrDefaultAsync(cancellation);
        return specification is not null && SpecificationQueries.Criteria(specification).ReleaseByException;
    }

    /// <summary>Decisions on a lot with their signatures, oldest first.</summary>
    public async Task<IReadOnlyList<(Review Review, Signature Signature)>> ReviewsAsync(string id, CancellationToken cancellation) =>
    [
        .. (await (
            from r in context.Reviews.AsNoTracking()
            join s in context.Signatures on r.SignatureId equals s.Id
            where r.LotId == id
            orderby r.Number
            select new { r, s }).ToListAsync(cancellation)).Select(x => (x.r, x.s)),
    ];

    /// <summary>Lots, newest first.</summary>
    public async Task<Outcome<LotPage>> ListAsync(LotFilter filter, CancellationToken cancellation)
    {
        var query =
            from l in context.Lots.AsNoTracking()
            join p in context.Products on l.ProductId equals p.Id
            select new
            {
                Lot = l,
                p.Code,
                State = context.LotEvents.Where(e => e.LotId == l.Id).OrderByDescending(e => e.Id).Select(e => e.State).First(),
                Computation = context.Computations.Where(c => c.LotId == l.Id).OrderByDescending(c => c.Number).Select(c => new { c.Verdict, c.Summary }).FirstOrDefault(),
            };
        if (filter.Product is not null)
        {
            query = query.Where(x => x.Code == filter.Product);
        }

        if (filter.State is not null)
        {
            query = query.Where(x => x.State == filter.State);
        }

        if (filter.Verdict is not null)
        {
            query = query.Where(x => x.Computation != null && x.Computation.Verdict == filter.Verdict);
        }

        if (filter.From is { } from)
        {
            DateTimeOffset utc = from.ToUniversalTime();
            query = query.Where(x => x.Lot.SubmittedAt >= utc);
        }

        if (filter.To is { } to)
        {
            DateTimeOffset utc = to.ToUniversalTime();
            query = query.Where(x => x.Lot.SubmittedAt < utc);
        }

        if (filter.Cursor is not null)
        {
            if (Decode(filter.Cursor) is not { } cursor)
            {
                return Problem.Malformed("This cursor is none of ours; leave it out to begin anew.");
            }

            query = query.Where(x => x.Lot.SubmittedAt < cursor.At || (x.Lot.SubmittedAt == cursor.At && string.Compare(x.Lot.Id, cursor.Id) < 0));
        }

        var rows = await query.OrderByDescending(x => x.Lot.SubmittedAt).ThenByDescending(x => x.Lot.Id).Take(PageSize + 1).ToListAsync(cancellation);
        LotListItem[] items =
        [
            .. rows.Take(PageSize).Select(x => new LotListItem(
                x.Lot.Id, x.Code, x.Lot.LotNumber, x.Lot.Sequence, x.State, x.Computation?.Verdict, x.Computation?.Summary, x.Lot.SubmittedAt)),
        ];
        return new LotPage(items, rows.Count > PageSize ? Encode(items[^1].SubmittedAt, items[^1].Id) : null);
    }

    private static string Encode(DateTimeOffset at, string id) =>
        Convert.ToBase64String(Encoding.UTF8.GetBytes($"{at.UtcTicks.ToString(CultureInfo.InvariantCulture)}|{id}")).Replace('+', '-').Replace('/', '_');

    private static (DateTimeOffset At, string Id)? Decode(string cursor)
    {
        byte[] buffer = new byte[cursor.Length];
        if (!Convert.TryFromBase64String(cursor.Replace('-', '+').Replace('_', '/'), buffer, out int length))
        {
            return null;
        }

        string[] parts = Encoding.UTF8.GetString(buffer, 0, length).Split('|');
        return parts.Length == 2
            && long.TryParse(parts[0], NumberStyles.None, CultureInfo.InvariantCulture, out long ticks)
            && ticks <= DateTimeOffset.MaxValue.UtcTicks
            ? (new DateTimeOffset(ticks, TimeSpan.Zero), parts[1])
            : null;
    }
}
