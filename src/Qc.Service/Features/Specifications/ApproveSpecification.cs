using System.Text.Json;
using System.Text.Json.Nodes;
using Microsoft.EntityFrameworkCore;
using Npgsql;
using Qc.Evidence;
using Qc.Records;
using Qc.Records.Audit;
using Qc.Records.Products;
using Qc.Service.Features.People;
using Qc.Service.Http;

namespace Qc.Service.Features.Specifications;

/// <summary>Body of an approval. The password makes it an electronic signature; without it nothing is approved.</summary>
public sealed record ApprovalRequest
{
    /// <summary>The approver's password, entered again.</summary>
    public string? Password { get; init; }

    /// <summary>From when the version holds; at once where left out.</summary>
    public DateTimeOffset? EffectiveFrom { get; init; }
}

/// <summary>Approves a draft: by a second person, signed.</summary>
public sealed class ApproveSpecification(QcDbContext context, SigningDesk desk)
{
    /// <summary>Approves the version.</summary>
    public async Task<Outcome<SpecificationDto>> RunAsync(
        string code, int version, ApprovalRequest request, string user, CancellationToken cancellation)
    {
        SpecificationVersion? draft = await (
            from s in context.SpecificationVersions.AsNoTracking()
            join p in context.Products on s.ProductId equals p.Id
            where p.Code == code && s.Version == version
            select s).SingleOrDefaultAsync(cancellation);
        if (draft is null)
        {
            return Problem.NotFound("specification version");
        }

        string actor = $"person:{user}";
        if (draft.DraftedBy == actor)
        {
            return Problem.NotAllowed("Nobody approves their own specification; a second person must.");
        }

        if (await context.SpecificationEvents.AnyAsync(e => e.SpecificationId == draft.Id && e.Kind == SpecificationEvent.Approved, cancellation))
        {
            return Problem.Conflict("already-approved", "Approved already", $"Version {version} of {code} is approved already.");
        }

        if (await desk.RefuseAsync(user, request.Password) is { } refused)
        {
            return refused;
        }

        await using var transaction = await context.Database.BeginTransactionAsync(cancellation);
        DateTimeOffset now = await context.DatabaseTimeAsync(cancellation);
        Records.Reviews.Signature signature = await desk.SignAsync(
            user, SignatureMeaning.Approved, "specification", draft.Id, draft.CriteriaJson, now, cancellation);
        context.SpecificationEvents.Add(new SpecificationEvent
        {
            Id = Ids.New(now),
            SpecificationId = draft.Id,
            Kind = SpecificationEvent.Approved,
            EffectiveFrom = request.EffectiveFrom ?? Posted(draft).EffectiveFrom ?? now,
            At = now,
            By = actor,
            SignatureId = signature.Id,
        });
        try
        {
            await context.SaveWithAuditAsync(
                [
                    new AuditDraft(actor, "specification.approved", "specification", $"{code}/{version}", After: new JsonObject
                    {
                        ["version"] = version,
                        ["signature"] = JsonNode.Parse(signature.StatementJson),
                    }),
                ],
                cancellation);
            await transaction.CommitAsync(cancellation);
        }
        catch (DbUpdateException e) when (e.InnerException is PostgresException { SqlState: PostgresErrorCodes.UniqueViolation })
        {
            return Problem.Conflict("already-approved", "Approved already", $"Version {version} of {code} is approved already.");
        }

        return await context.DtoAsync(draft, cancellation);
    }

    private static SpecificationRequest Posted(SpecificationVersion draft) =>
        JsonSerializer.Deserialize<SpecificationRequest>(draft.PostedJson, Json.Options)!;
}
