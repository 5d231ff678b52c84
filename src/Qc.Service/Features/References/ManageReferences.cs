using System.Text.Json;
using System.Text.Json.Nodes;
using Microsoft.EntityFrameworkCore;
using Npgsql;
using Qc.Engine.Verdicts;
using Qc.Evidence;
using Qc.Records;
using Qc.Records.Audit;
using Qc.Records.Lots;
using Qc.Records.Products;
using Qc.Records.Reviews;
using Qc.Service.Features.People;
using Qc.Service.Http;

namespace Qc.Service.Features.References;

/// <summary>
/// Reference lots: the method owner proposes a checked lot, a second person releases it. A lot that a reviewer other than
/// the proposer has released with a signature needs no second release: that signature is the second person's.
/// </summary>
public sealed class ManageReferences(QcDbContext context, SigningDesk desk, TimeProvider time)
{
    /// <summary>All references of a product, newest first.</summary>
    public async Task<Outcome<ReferenceDto[]>> AllAsync(string code, CancellationToken cancellation)
    {
        Product? product = await context.Products.AsNoTracking().SingleOrDefaultAsync(p => p.Code == code, cancellation);
        return product is null
            ? Problem.NotFound("product")
            : (await context.ReferencesAsync(product.Id, time.GetUtcNow(), cancellation)).ToArray();
    }

    /// <summary>Proposes a checked lot.</summary>
    public async Task<Outcome<ReferenceDto>> ProposeAsync(string code, ReferenceRequest request, string actor, CancellationToken cancellation)
    {
        Product? product = await context.Products.AsNoTracking().SingleOrDefaultAsync(p => p.Code == code, cancellation);
        if (product is null)
        {
            return Problem.NotFound("product");
        }

        Lot? lot = await context.Lots.AsNoTracking().SingleOrDefaultAsync(l => l.Id == request.Lot && l.ProductId == product.Id, cancellation);
        if (lot is null)
        {
            return Problem.InvalidField("/lot", $"{code} has no lot with this identifier; take the \"id\" that the submission answered.");
        }

        Computation? computation = await context.Computations.AsNoTracking().Where(c => c.LotId == lot.Id).OrderByDescending(c => c.Number).FirstOrDefaultAsync(cancellation);
        string state = await context.LotEvents.Where(e => e.LotId == lot.Id).OrderByDescending(e => e.Id).Select(e => e.State).FirstAsync(cancellation);
        FittedConstants? constants = computation is null
            ? null
            : JsonSerializer.Deserialize<CheckReport>(computation.ReportJson, Json.Options)!.Constants;
        if (WhyNot(state, computation, constants) is { } why)
        {
            return Problem.InvalidField("/lot", why);
        }

        await using var transaction = await context.Database.BeginTransactionAsync(cancellation);
        DateTimeOffset now = await context.DatabaseTimeAsync(cancellation);
        var reference = new ProductReference
        {
            Id = Ids.New(now),
            ProductId = product.Id,
            Number = 1 + (await context.ProductReferences.Where(r => r.ProductId == product.Id).MaxAsync(r => (int?)r.Number, cancellation) ?? 0),
            LotId = lot.Id,
            ComputationId = computation!.Id,
            ConstantsJson = JsonSerializer.Serialize(constants, Json.Options),
            ProposedAt = now,
            ProposedBy = actor,
        };
        context.ProductReferences.Add(reference);
        var audit = new List<AuditDraft>
        {
            new(actor, "reference.proposed", "product", code, After: new JsonObject { ["number"] = reference.Number, ["lot"] = lot.Id }),
        };
        Review? release = await context.Reviews.AsNoTracking().Where(r => r.LotId == lot.Id && r.Decision == "release")
            .OrderByDescending(r => r.Number).FirstOrDefaultAsync(cancellation);
        if (release is not null && release.By != actor)
        {
            context.ProductReferenceEvents.Add(Event(reference, ProductReferenceEvent.Released, now, release.By, release.SignatureId));
            audit.Add(new AuditDraft(
                actor, "reference.released", "product", code, After: new JsonObject { ["number"] = reference.Number, ["bySignature"] = release.SignatureId }));
        }

        try
        {
            await context.SaveWithAuditAsync(audit, cancellation);
            await transaction.CommitAsync(cancellation);
        }
        catch (DbUpdateException e) when (e.InnerException is PostgresException { SqlState: PostgresErrorCodes.UniqueViolation })
        {
            return Problem.Conflict("changed", "Changed in the meantime", "Somebody else proposed a reference at the same time; try again.");
        }

        return (await context.ReferencesAsync(product.Id, time.GetUtcNow(), cancellation)).Single(r => r.Number == reference.Number);
    }

    /// <summary>Releases a proposed reference, or withdraws one, with the signer's password.</summary>
    public async Task<Outcome<ReferenceDto>> DecideAsync(
        string code, int number, string kind, ReferenceSigningRequest request, string user, CancellationToken cancellation)
    {
        ProductReference? reference = await (
            from r in context.ProductReferences.AsNoTracking()
            join p in context.Products on r.ProductId equals p.Id
            where p.Code == code && r.Number == number
            select r).SingleOrDefaultAsync(cancellation);
        if (reference is null)
        {
            return Problem.NotFound("reference");
        }

        string actor = $"person:{user}";
        if (kind == ProductReferenceEvent.Released && reference.ProposedBy == actor)
        {
            return Problem.NotAllowed("Nobody releases a reference that they proposed; a second person must.");
        }

        bool released = await context.ProductReferenceEvents.AnyAsync(
            e => e.ReferenceId == reference.Id && e.Kind == ProductReferenceEvent.Released, cancellation);
        if (kind == ProductReferenceEvent.Withdrawn && !released)
        {
            return Problem.Conflict("not-released", "Not in use", $"Reference {number} of {code} was never released; there is nothing to withdraw.");
        }

        if (await desk.RefuseAsync(user, request.Password) is { } refused)
        {
            return refused;
        }

        await using var transaction = await context.Database.BeginTransactionAsync(cancellation);
        DateTimeOffset now = await context.DatabaseTimeAsync(cancellation);
        Signature signature = await desk.SignAsync(
            user,
            kind == ProductReferenceEvent.Released ? SignatureMeaning.Approved : SignatureMeaning.Rejected,
            "reference",
            reference.Id,
            reference.ConstantsJson,
            now,
            cancellation);
        context.ProductReferenceEvents.Add(Event(reference, kind, now, actor, signature.Id));
        try
        {
            await context.SaveWithAuditAsync(
                [new AuditDraft(actor, $"reference.{kind}", "product", code, After: new JsonObject { ["number"] = number })], cancellation);
            await transaction.CommitAsync(cancellation);
        }
        catch (DbUpdateException e) when (e.InnerException is PostgresException { SqlState: PostgresErrorCodes.UniqueViolation })
        {
            return Problem.Conflict($"already-{kind}", "Done already", $"Reference {number} of {code} is {kind} already.");
        }

        return (await context.ReferencesAsync(reference.ProductId, time.GetUtcNow(), cancellation)).Single(r => r.Number == number);
    }

    /// <summary>Why a lot cannot be a reference; null where it can.</summary>
    private static string? WhyNot(string state, Computation? computation, FittedConstants? constants) => state switch
    {
        LotState.Queued or LotState.Checking => "The lot is not checked yet; try again when it is.",
        LotState.Rejected => "The lot was rejected; a rejected lot is no reference.",
        _ when computation is null || computation.Unreadable => "The lot's spectrum could not be read.",
        _ when computation.Unsuitable => "The lot's measurement was not fit to be judged; measure it again and take that one.",
        _ when constants is null || constants.Shifts.IsEmpty => "The lot's check found no signal of the product.",
        _ => null,
    };

    private static ProductReferenceEvent Event(ProductReference reference, string kind, DateTimeOffset at, string by, string signatureId) => new()
    {
        Id = Ids.New(at),
        ReferenceId = reference.Id,
        Kind = kind,
        At = at,
        By = by,
        SignatureId = signatureId,
    };
}
