using System.Text.Json.Nodes;
using Microsoft.EntityFrameworkCore;
using Qc.Evidence;
using Qc.Records;
using Qc.Records.Audit;
using Qc.Service.Hosting;
using Qc.Service.Http;
using Qc.Service.Security;

namespace Qc.Service.Features.Audit;

/// <summary>An audit entry as answered.</summary>
/// <param name="Index">Position in the log.</param>
/// <param name="LeafHash">Hash of its leaf, hex.</param>
/// <param name="Entry">The entry; its canonical form is the leaf's content.</param>
public sealed record AuditEntryDto(long Index, string LeafHash, JsonNode Entry);

/// <summary>A page of entries.</summary>
public sealed record AuditPage(IReadOnlyList<AuditEntryDto> Entries, string? NextCursor);

/// <summary>A proof: hashes from leaf to root, or between two roots.</summary>
public sealed record ProofDto(long? Index, long? From, long Size, string? LeafHash, string? FromRootHash, string RootHash, IReadOnlyList<string> Path);

/// <summary>Routes of the audit log.</summary>
internal static class AuditApi
{
    private const int PageSize = 200;

    public static void MapAudit(this IEndpointRouteBuilder api)
    {
        RouteGroupBuilder group = api.MapGroup("/audit").WithTags("Audit").RequireAuthorization(Policies.Audit);
        group.MapGet("/", ListAsync).Produces<AuditPage>().WithProblems(400, 401, 403).WithSummary("Entries, oldest first");
        group.MapGet("/head", (SignedHeads heads, CancellationToken c) => heads.TakeAsync(c)).Produces<SignedHead>().WithProblems(401, 403)
            .WithSummary("Signed tree head");
        group.MapGet("/entries/{index:long}/proof", InclusionAsync).Produces<ProofDto>().WithProblems(401, 403, 404).WithSummary("Inclusion proof of an entry");
        group.MapGet("/consistency", ConsistencyAsync).Produces<ProofDto>().WithProblems(400, 401, 403).WithSummary("Proof that an older head is a prefix of a newer one");
        group.MapGet("/export", ExportAsync).Produces(200, contentType: "application/json").WithProblems(401, 403)
            .WithSummary("The whole log in one file for qc-verify");
        group.MapGet("/check", CheckAsync).Produces<StoreCheckResult>().WithProblems(401, 403)
            .WithSummary("Checks every row of the database against the log, and the log against its signed heads");
        group.MapGet("/key", (SiteKeys keys) => Results.Text(keys.PublicKeyPem, "application/x-pem-file")).WithProblems(401, 403)
            .WithSummary("Public key of the log");
    }

    private static async Task<IResult> ListAsync(
        QcDbContext context, CancellationToken cancellation, string? subject = null, DateTimeOffset? from = null, long? cursor = null)
    {
        IQueryable<AuditRow> rows = context.AuditRows.AsNoTracking();
        if (subject is not null)
        {
            string[] parts = subject.Split(':', 2);
            rows = parts.Length == 2
                ? rows.Where(r => r.SubjectType == parts[0] && r.SubjectId == parts[1])
                : rows.Where(r => r.SubjectId == subject);
        }

        if (from is { } time)
        {
            DateTimeOffset utc = time.ToUniversalTime();
            rows = rows.Where(r => r.At >= utc);
        }

        if (cursor is { } after)
        {
            rows = rows.Where(r => r.Index > after);
        }

        List<AuditRow> page = await rows.OrderBy(r => r.Index).Take(PageSize + 1).ToListAsync(cancellation);
        return Results.Ok(new AuditPage(
            [.. page.Take(PageSize).Select(r => new AuditEntryDto(r.Index, Convert.ToHexStringLower(r.LeafHash), JsonNode.Parse(r.CanonicalJson)!))],
            page.Count > PageSize ? page[PageSize - 1].Index.ToString(System.Globalization.CultureInfo.InvariantCulture) : null));
    }

    private static async Task<IResult> InclusionAsync(long index, QcDbContext context, CancellationToken cancellation, long? size = null)
    {
        long entries = await context.AuditSizeAsync(cancellation);
        long upTo = size ?? entries;
        if (index < 0 || index >= upTo || upTo > entries)
        {
            return Problem.NotFound("entry").ToResult();
        }

        MerkleTree.NodeReader read = context.NodeReader();
        return Results.Ok(new ProofDto(
            index, null, upTo, Convert.ToHexStringLower(read(0, index)), null, Convert.ToHexStringLower(MerkleTree.Root(upTo, read)),
            [.. MerkleTree.InclusionProof(index, upTo, read).Select(Convert.ToHexStringLower)]));
    }

    private static async Task<IResult> ConsistencyAsync(long from, QcDbContext context, CancellationToken cancellation, long? to = null)
    {
        long entries = await context.AuditSizeAsync(cancellation);
        long size = to ?? entries;
        if (from < 1 || from > size || size > entries)
        {
            return Problem.Malformed($"from and to are sizes of the log, 1 to {entries}, from not above to.").ToResult();
        }

        MerkleTree.NodeReader read = context.NodeReader();
        return Results.Ok(new ProofDto(
            null, from, size, null, Convert.ToHexStringLower(MerkleTree.Root(from, read)), Convert.ToHexStringLower(MerkleTree.Root(size, read)),
            [.. MerkleTree.ConsistencyProof(from, size, read).Select(Convert.ToHexStringLower)]));
    }

    private static async Task<IResult> CheckAsync(QcDbContext context, SiteKeys keys, ILogger<StoreCheckResult> logger, CancellationToken cancellation)
    {
        await using var oneState = await context.Database.BeginTransactionAsync(System.Data.IsolationLevel.RepeatableRead, cancellation);
        StoreCheckResult result = await context.CheckStoreAsync(keys.LogKey, cancellation);
        foreach (string finding in result.Findings)
        {
            logger.LogCritical("The store does not agree with its evidence: {Finding}", finding);
        }

        return Results.Ok(result);
    }

    private static async Task<IResult> ExportAsync(QcDbContext context, SignedHeads heads, CancellationToken cancellation)
    {
        SignedHead head = await heads.TakeAsync(cancellation);
        List<string> entries = await context.AuditRows.AsNoTracking().Where(r => r.Index < head.Size).OrderBy(r => r.Index).Select(r => r.CanonicalJson).ToListAsync(cancellation);
        return Results.File(AuditExport.Write(entries, head.Text, head.Signature), "application/json", "audit-export.json");
    }
}
