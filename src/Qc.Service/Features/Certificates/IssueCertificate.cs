using System.Collections.Immutable;
using System.Runtime.InteropServices;
using System.Security.Cryptography;
using System.Text.Json;
using System.Text.Json.Nodes;
using Microsoft.EntityFrameworkCore;
using Qc.Certificates;
using Qc.Engine.Verdicts;
using Qc.Evidence;
using Qc.Records;
using Qc.Records.Audit;
using Qc.Records.Lots;
using Qc.Records.Products;
using Qc.Records.Reviews;
using Qc.Service.Features.Audit;
using Qc.Service.Features.Callbacks;
using Qc.Service.Features.Lots;
using Qc.Service.Features.Reviews;
using Qc.Service.Features.Specifications;
using Qc.Service.Hosting;
using Qc.Service.Http;
using Wolverine.EntityFrameworkCore;

namespace Qc.Service.Features.Certificates;

/// <summary>
/// Releases a lot and issues its certificate. The intent is recorded before signing and the outcome after, so that a crash
/// between the two leaves a trace and the next attempt takes the same number.
/// </summary>
public sealed class IssueCertificate(
    QcDbContext context, IDbContextOutbox<QcDbContext> outbox, SignedHeads heads, SiteCertificate site, QcOptions options)
{
    /// <summary>Releases a lot that passed, where its specification lets it go without a reviewer.</summary>
    public async Task ReleaseByExceptionAsync(string lotId, CancellationToken cancellation)
    {
        SpecificationVersion specification = await (
            from l in context.Lots.AsNoTracking()
            join s in context.SpecificationVersions on l.SpecificationId equals s.Id
            where l.Id == lotId
            select s).SingleAsync(cancellation);
        bool passed = await context.Computations.AnyAsync(c => c.LotId == lotId && c.Verdict == "pass", cancellation);
        bool open = !await context.Certificates.AnyAsync(c => c.LotId == lotId, cancellation) && !await context.Reviews.AnyAsync(r => r.LotId == lotId, cancellation);
        if (passed && open && SpecificationQueries.Criteria(specification).ReleaseByException)
        {
            await IssueAsync(lotId, "service", cancellation);
        }
    }

    /// <summary>
    /// Issues the certificate of a lot that may be released; a problem says why not. Where the lot has one and none is to be
    /// superseded, nothing is done: two attempts at once issue one.
    /// </summary>
    public async Task<Problem?> IssueAsync(string lotId, string actor, CancellationToken cancellation, string? supersedes = null)
    {
        context.ChangeTracker.Clear();
        Facts facts = await FactsAsync(lotId, cancellation);
        ReleaseDecision decision = ReleaseDecision.Evaluate(facts.Case);
        if (decision.Token is not { } token)
        {
            return Problem.Conflict("not-releasable", "The lot cannot be released", string.Join(" ", decision.Obstacles));
        }

        await RecordIntentAsync(lotId, actor, facts, cancellation);
        SignedHead head = await heads.TakeAsync(cancellation);
        await using var transaction = await context.Database.BeginTransactionAsync(cancellation);
        CertificateNumber taken = await context.NextCertificateNumberAsync(cancellation);
        bool done = supersedes is null
            ? await context.Certificates.AnyAsync(c => c.LotId == lotId, cancellation)
            : await context.Certificates.AnyAsync(c => c.SupersedesNumber == supersedes, cancellation);
        if (done)
        {
            return null;
        }

        string number = taken.ToString();
        DateTimeOffset now = await context.DatabaseTimeAsync(cancellation);
        int version = 1 + (await context.Certificates.Where(c => c.LotId == lotId).MaxAsync(c => (int?)c.Version, cancellation) ?? 0);
        string json = CertificateMapping.Json(facts, number, version, supersedes, now, head, options);
        CertificateContent content = CertificateMapping.Content(facts, number, version, supersedes, now, head, options, json);
        byte[] pdf = site.Signer.Sign(CertificateRenderer.Render(content, token));
        context.Certificates.Add(new Certificate
        {
            Number = number,
            Year = taken.Year,
            Serial = taken.Serial,
            LotId = lotId,
            Version = version,
            SupersedesNumber = supersedes,
            Json = json,
            Pdf = pdf,
            PdfSha256 = Convert.ToHexStringLower(SHA256.HashData(pdf)),
            IssuedAt = now,
        });
        context.LotEvents.Add(new LotEvent { LotId = lotId, State = LotState.Released, At = now, By = actor });
        await context.SaveWithAuditAsync(
            [
                new AuditDraft(actor, "certificate.issued", "lot", lotId, After: new JsonObject
                {
                    ["number"] = number,
                    ["supersedes"] = supersedes,
                    ["pdfSha256"] = Convert.ToHexStringLower(SHA256.HashData(pdf)),
                }),
            ],
            cancellation);
        await ReportOutcome.PublishAsync(outbox, facts.Lot);
        await outbox.SaveChangesAndFlushMessagesAsync(cancellation); // Commits.
        return null;
    }

    private async Task RecordIntentAsync(string lotId, string actor, Facts facts, CancellationToken cancellation)
    {
        await using var transaction = await context.Database.BeginTransactionAsync(cancellation);
        await context.SaveWithAuditAsync(
            [
                new AuditDraft(actor, "certificate.intended", "lot", lotId, After: new JsonObject { ["reportSha256"] = facts.Computation.ReportSha256 }),
            ],
            cancellation);
        await transaction.CommitAsync(cancellation);
    }

    private async Task<Facts> FactsAsync(string lotId, CancellationToken cancellation)
    {
        Lot lot = await context.Lots.AsNoTracking().SingleAsync(l => l.Id == lotId, cancellation);
        Computation computation = await context.Computations.AsNoTracking().Where(c => c.LotId == lotId).OrderByDescending(c => c.Number).FirstAsync(cancellation);
        SpecificationVersion specification = await context.SpecificationVersions.AsNoTracking().SingleAsync(s => s.Id == lot.SpecificationId, cancellation);
        SpecificationEvent approval = await context.SpecificationEvents.AsNoTracking()
            .SingleAsync(e => e.SpecificationId == specification.Id && e.Kind == SpecificationEvent.Approved, cancellation);
        var reviews = await (
            from r in context.Reviews.AsNoTracking()
            join s in context.Signatures on r.SignatureId equals s.Id
            where r.LotId == lotId
            orderby r.Number
            select new { Review = r, Signature = s }).ToListAsync(cancellation);
        string state = await context.LotEvents.AsNoTracking().Where(e => e.LotId == lotId).OrderByDescending(e => e.Id).Select(e => e.State).FirstAsync(cancellation);
        return new Facts
        {
            Lot = lot,
            Product = await context.Products.AsNoTracking().SingleAsync(p => p.Id == lot.ProductId, cancellation),
            Specification = specification,
            Approval = approval,
            Computation = computation,
            Report = LotMapping.Report(computation),
            Spectra = await context.LotSpectra.AsNoTracking().Where(s => s.LotId == lotId).OrderBy(s => s.Number)
                .Select(s => new SpectrumRow(s.Name, s.Sha256)).ToListAsync(cancellation),
            Trace = await context.Traces.AsNoTracking().Where(t => t.ComputationId == computation.Id).OrderBy(t => t.SpectrumNumber).FirstOrDefaultAsync(cancellation),
            Reviews = [.. reviews.Select(r => (r.Review, r.Signature))],
            Case = new ReleaseCase(
                lotId,
                state,
                computation.Verdict,
                computation.Unsuitable,
                computation.ReportSha256,
                lot.SubmittedBy,
                SpecificationQueries.Criteria(specification).ReleaseByException,
                [.. DecideLot.Flags(computation)],
                [.. reviews.Select(r => ReviewFact(r.Review, r.Signature, computation))]),
        };
    }

    private static ReviewFact ReviewFact(Review review, Signature signature, Computation computation)
    {
        FindingDecision[] findings = JsonSerializer.Deserialize<FindingDecision[]>(review.FindingsJson, Http.Json.Options)!;
        string content = DecideLot.ContentJson(review.LotId, computation.ReportSha256, review.Decision, review.Reason, review.FindingsJson);
        return new ReviewFact(
            review.By["person:".Length..],
            review.Decision,
            computation.ReportSha256,
            [.. findings.Where(f => f.Accepted).Select(f => new FlaggedFinding(f.Criterion, f.Subject))],
            SignatureStatement.HashOfContent(content),
            new SignatureStatement(
                signature.PrintedName, signature.PersonUser, signature.At, signature.Meaning, signature.SubjectType, signature.SubjectId, signature.ContentSha256));
    }
}

/// <summary>Everything a certificate tells of, read from the records.</summary>
internal sealed record Facts
{
    public required Lot Lot { get; init; }

    public required Product Product { get; init; }

    public required SpecificationVersion Specification { get; init; }

    public required SpecificationEvent Approval { get; init; }

    public required Computation Computation { get; init; }

    public required CheckReport Report { get; init; }

    public required IReadOnlyList<SpectrumRow> Spectra { get; init; }

    public required Trace? Trace { get; init; }

    public required ImmutableArray<(Review Review, Signature Signature)> Reviews { get; init; }

    public required ReleaseCase Case { get; init; }

    public CertificateTrace? Curves()
    {
        if (Trace is null)
        {
            return null;
        }

        float[] measured = MemoryMarshal.Cast<byte, float>(Trace.Measured).ToArray();
        float[] modelled = MemoryMarshal.Cast<byte, float>(Trace.Modelled).ToArray();
        float[] leftOver = [.. measured.Zip(modelled, (m, f) => m - f)];
        return new CertificateTrace(Trace.FirstPpm, Trace.PpmPerPoint, measured, modelled, leftOver);
    }
}
