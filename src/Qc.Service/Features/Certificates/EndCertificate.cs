using System.Text.Json.Nodes;
using Microsoft.EntityFrameworkCore;
using Npgsql;
using Qc.Evidence;
using Qc.Records;
using Qc.Records.Audit;
using Qc.Records.Reviews;
using Qc.Service.Features.People;
using Qc.Service.Http;

namespace Qc.Service.Features.Certificates;

/// <summary>Body of a withdrawal or a replacement: why, and the password again as signature.</summary>
public sealed record EndRequest
{
    /// <summary>Why.</summary>
    public required string Reason { get; init; }

    /// <summary>The signer's password, entered again.</summary>
    public required string Password { get; init; }
}

/// <summary>Ends a certificate: withdraws it, or issues another in its place from the records as they are. Both are signed.</summary>
public sealed class EndCertificate(QcDbContext context, SigningDesk desk, IssueCertificate issue)
{
    /// <summary>Withdraws a certificate.</summary>
    public async Task<Outcome<CertificateState>> WithdrawAsync(string number, EndRequest request, string user, CancellationToken cancellation)
    {
        if (await RefuseAsync(number, request, user, cancellation) is { } refused)
        {
            return refused;
        }

        Certificate certificate = await context.Certificates.AsNoTracking().SingleAsync(c => c.Number == number, cancellation);
        string actor = $"person:{user}";
        await using var transaction = await context.Database.BeginTransactionAsync(cancellation);
        DateTimeOffset now = await context.DatabaseTimeAsync(cancellation);
        Signature signature = await SignAsync(certificate, "withdraw", request.Reason, user, now, cancellation);
        context.CertificateEvents.Add(new CertificateEvent
        {
            Id = Ids.New(now), CertificateNumber = number, Kind = CertificateEvent.Withdrawn, Reason = request.Reason, At = now, By = actor, SignatureId = signature.Id,
        });
        try
        {
            await context.SaveWithAuditAsync([Draft(actor, "certificate.withdrawn", certificate, request.Reason, signature)], cancellation);
            await transaction.CommitAsync(cancellation);
        }
        catch (DbUpdateException e) when (e.InnerException is PostgresException { SqlState: PostgresErrorCodes.UniqueViolation })
        {
            return Withdrawn(number);
        }

        return await CertificateState.OfAsync(context, number, cancellation);
    }

    /// <summary>Issues another certificate for the same lot in place of this one; the answer is that of the old one.</summary>
    public async Task<Outcome<CertificateState>> SupersedeAsync(string number, EndRequest request, string user, CancellationToken cancellation)
    {
        if (await RefuseAsync(number, request, user, cancellation) is { } refused)
        {
            return refused;
        }

        Certificate certificate = await context.Certificates.AsNoTracking().SingleAsync(c => c.Number == number, cancellation);
        string actor = $"person:{user}";
        await using (var transaction = await context.Database.BeginTransactionAsync(cancellation))
        {
            Signature signature = await SignAsync(certificate, "supersede", request.Reason, user, await context.DatabaseTimeAsync(cancellation), cancellation);
            await context.SaveWithAuditAsync([Draft(actor, "certificate.replacement-ordered", certificate, request.Reason, signature)], cancellation);
            await transaction.CommitAsync(cancellation);
        }

        return await issue.IssueAsync(certificate.LotId, actor, cancellation, number) is { } problem
            ? problem
            : await CertificateState.OfAsync(context, number, cancellation);
    }

    private async Task<Problem?> RefuseAsync(string number, EndRequest request, string user, CancellationToken cancellation)
    {
        if (string.IsNullOrWhiteSpace(request.Reason) || request.Reason.Length > 4000)
        {
            return Problem.InvalidField("/reason", "Give a reason of 1 to 4000 characters.");
        }

        if (!await context.Certificates.AnyAsync(c => c.Number == number, cancellation))
        {
            return Problem.NotFound("certificate");
        }

        CertificateState state = await CertificateState.OfAsync(context, number, cancellation);
        return state.State == CertificateEvent.Withdrawn
            ? Withdrawn(number)
            : state.SupersededBy is { } successor
                ? Problem.Conflict("certificate-ended", "Ended already", $"Certificate {number} is superseded by {successor}.")
                : await desk.RefuseAsync(user, request.Password);
    }

    private static Problem Withdrawn(string number) => Problem.Conflict("certificate-ended", "Ended already", $"Certificate {number} is withdrawn already.");

    private Task<Signature> SignAsync(Certificate certificate, string act, string reason, string user, DateTimeOffset at, CancellationToken cancellation) =>
        desk.SignAsync(
            user,
            act == "withdraw" ? SignatureMeaning.Rejected : SignatureMeaning.Approved,
            "certificate",
            certificate.Number,
            new JsonObject { ["act"] = act, ["number"] = certificate.Number, ["pdfSha256"] = certificate.PdfSha256, ["reason"] = reason }.ToJsonString(),
            at,
            cancellation);

    private static AuditDraft Draft(string actor, string action, Certificate certificate, string reason, Signature signature) =>
        new(actor, action, "certificate", certificate.Number, reason, After: new JsonObject
        {
            ["lotId"] = certificate.LotId,
            ["signature"] = JsonNode.Parse(signature.StatementJson),
        });
}
