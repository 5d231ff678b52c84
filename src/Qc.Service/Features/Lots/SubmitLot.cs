using System.Collections.Immutable;
using System.Security.Cryptography;
using System.Text;
using System.Text.Json;
using System.Text.Json.Nodes;
using Microsoft.EntityFrameworkCore;
using Npgsql;
using Qc.Chemistry;
using Qc.Records;
using Qc.Records.Audit;
using Qc.Records.Lots;
using Qc.Records.Products;
using Qc.Service.Features.Specifications;
using Qc.Service.Http;
using Wolverine.EntityFrameworkCore;

namespace Qc.Service.Features.Lots;

/// <summary>A submission: the request, its files, and what the headers said.</summary>
/// <param name="Request">The request.</param>
/// <param name="Files">Files of a form by part name.</param>
/// <param name="IdempotencyKey">The caller's key, where one was sent.</param>
/// <param name="BodySha256">SHA-256 of the body's content.</param>
/// <param name="Actor">Who submits.</param>
public sealed record Submission(
    LotRequest Request, IReadOnlyDictionary<string, byte[]> Files, string? IdempotencyKey, string BodySha256, string Actor);

/// <summary>The lot that a submission made, or that the same submission had made before.</summary>
/// <param name="LotId">Its identifier.</param>
/// <param name="Repeated">Whether it was there already.</param>
public sealed record Accepted(string LotId, bool Repeated);

/// <summary>Asks a worker to check a lot; kept in the database until it is done.</summary>
/// <param name="LotId">The lot.</param>
public sealed record CheckLot(string LotId);

/// <summary>Accepts a lot: records it, its spectra byte for byte, and the order to check it, in one transaction.</summary>
public sealed class SubmitLot(QcDbContext context, IDbContextOutbox<QcDbContext> outbox, IStructureReader structures)
{
    private const int MostSpectra = 8;
    private static readonly string[] Formats = ["jcamp-dx", "nmrml", "csv"];

    /// <summary>Accepts the lot.</summary>
    public async Task<Outcome<Accepted>> RunAsync(Submission submission, CancellationToken cancellation)
    {
        LotRequest request = submission.Request;
        if (await RepeatedAsync(submission, cancellation) is { } repeated)
        {
            return repeated;
        }

        Outcome<ImmutableArray<LotSpectrum>> spectra = Spectra(submission);
        if (spectra.Problem is { } wrong)
        {
            return wrong;
        }

        if (Check(request) is { } problem)
        {
            return problem;
        }

        Product? product = await context.Products.AsNoTracking().SingleOrDefaultAsync(p => p.Code == request.Product, cancellation);
        if (product is null)
        {
            return Problem.Invalid(
                "unknown-product", "Unknown product", "The lot names a product that is not set up.", new FieldError("/product", "There is no such product."));
        }

        await using var transaction = await context.Database.BeginTransactionAsync(cancellation);
        DateTimeOffset now = await context.DatabaseTimeAsync(cancellation);
        SpecificationVersion? specification = await context.InForceAsync(product.Id, request.SampledAt ?? now, cancellation)
            ?? await context.InForceAsync(product.Id, now, cancellation);
        if (specification is null)
        {
            return Problem.Invalid(
                "no-specification",
                "No specification in force",
                $"{product.Code} has no approved specification in force; draft one and have a second person approve it.",
                new FieldError("/product", "It has no approved specification in force."));
        }

        var lot = new Lot
        {
            Id = Ids.New(now),
            ProductId = product.Id,
            SpecificationId = specification.Id,
            LotNumber = request.Lot,
            Sequence = request.Sequence ?? 1,
            SampledAt = request.SampledAt?.ToUniversalTime(),
            SampleJson = request.Sample is null ? null : JsonSerializer.Serialize(request.Sample, Json.Options),
            Instrument = request.Instrument,
            CallbackUrl = request.Callback,
            SubmittedAt = now,
            SubmittedBy = submission.Actor,
        };
        context.Lots.Add(lot);
        context.LotSpectra.AddRange(spectra.Value.Select(s => new LotSpectrum
        {
            LotId = lot.Id, Number = s.Number, Name = s.Name, Format = s.Format, Sha256 = s.Sha256, Bytes = s.Bytes,
        }));
        context.LotEvents.Add(new LotEvent { LotId = lot.Id, State = LotState.Queued, At = now, By = submission.Actor });
        if (submission.IdempotencyKey is { } key)
        {
            context.IdempotencyRecords.Add(new IdempotencyRecord
            {
                Principal = submission.Actor, Key = key, BodySha256 = submission.BodySha256, LotId = lot.Id, At = now,
            });
        }

        try
        {
            await outbox.PublishAsync(new CheckLot(lot.Id));
            await context.SaveWithAuditAsync([Audit(submission, lot, product, specification, spectra.Value)], cancellation);
            await outbox.SaveChangesAndFlushMessagesAsync(cancellation);
        }
        catch (DbUpdateException e) when (e.InnerException is PostgresException { SqlState: PostgresErrorCodes.UniqueViolation })
        {
            return await ConflictAsync(submission, cancellation);
        }

        return new Accepted(lot.Id, false);
    }

    private async Task<Outcome<Accepted>> ConflictAsync(Submission submission, CancellationToken cancellation)
    {
        await context.Database.RollbackTransactionAsync(cancellation);
        context.ChangeTracker.Clear();
        if (await RepeatedAsync(submission, cancellation) is { } repeated)
        {
            return repeated;
        }

        return Problem.Conflict(
            "lot-exists",
            "The lot exists already",
            $"Lot {submission.Request.Lot} of {submission.Request.Product} with sequence {submission.Request.Sequence ?? 1} was submitted before; "
            + "a further measurement takes the next sequence.",
            new FieldError("/lot", "It was submitted before."));
    }

    private async Task<Outcome<Accepted>?> RepeatedAsync(Submission submission, CancellationToken cancellation)
    {
        if (submission.IdempotencyKey is not { } key)
        {
            return null;
        }

        if (key.Length is 0 or > 255)
        {
            return Problem.Malformed("An Idempotency-Key has 1 to 255 characters.");
        }

        IdempotencyRecord? known = await context.IdempotencyRecords.AsNoTracking()
            .SingleOrDefaultAsync(r => r.Principal == submission.Actor && r.Key == key, cancellation);
        return known is null
            ? null
            : known.BodySha256 == submission.BodySha256
                ? new Accepted(known.LotId, true)
                : Problem.Invalid("idempotency-key-reused", "The key was used for another body", "This Idempotency-Key came with another body before; take a new one.");
    }

    private Problem? Check(LotRequest request)
    {
        var errors = new List<FieldError>();
        if (string.IsNullOrWhiteSpace(request.Lot) || request.Lot.Length > 100)
        {
            errors.Add(new FieldError("/lot", "A lot number has 1 to 100 characters."));
        }

        if (request.Sequence is < 1 or > 1000)
        {
            errors.Add(new FieldError("/sequence", "A sequence is a number from 1 to 1000."));
        }

        if (request.Callback is { } callback
            && !(Uri.TryCreate(callback, UriKind.Absolute, out Uri? uri) && uri.Scheme is "http" or "https"))
        {
            errors.Add(new FieldError("/callback", "A callback is an absolute http or https address."));
        }

        if (request.Sample is { } sample)
        {
            CheckSample(sample, errors);
        }

        return errors.Count == 0 ? null : Problem.Invalid("invalid-field", "A field is wrong", errors[0].Detail, [.. errors]);
    }

    private void CheckSample(SampleRequest sample, List<FieldError> errors)
    {
        if (sample.MassMg is { } mass && !(mass > 0 && mass < 1e6))
        {
            errors.Add(new FieldError("/sample/massMg", "A mass is above zero and below 1 kg."));
        }

        if (sample.MassStandardUncertaintyMg is { } u && !(u >= 0 && u < 1e3))
        {
            errors.Add(new FieldError("/sample/massStandardUncertaintyMg", "It must be zero or more."));
        }

        if (sample.InternalStandard is not { } standard)
        {
            return;
        }

        if (!(standard.MassMg > 0 && standard.MassMg < 1e6))
        {
            errors.Add(new FieldError("/sample/internalStandard/massMg", "A mass is above zero and below 1 kg."));
        }

        if (!(standard.PurityPercent > 0 && standard.PurityPercent <= 100))
        {
            errors.Add(new FieldError("/sample/internalStandard/purityPercent", "A purity is above 0 and at most 100."));
        }

        if (!(standard.PurityStandardUncertaintyPercent >= 0))
        {
            errors.Add(new FieldError("/sample/internalStandard/purityStandardUncertaintyPercent", "It must be zero or more."));
        }

        string? smiles = standard.Smiles ?? InternalStandards.Find(standard.Substance);
        if (smiles is null)
        {
            errors.Add(new FieldError(
                "/sample/internalStandard/substance", $"This name is not known; add smiles, or choose from {string.Join(", ", InternalStandards.Names)}."));
        }
        else if (structures.ReadSmiles(smiles).Error is { } error)
        {
            errors.Add(new FieldError("/sample/internalStandard/smiles", error.Message));
        }
    }

    private static Outcome<ImmutableArray<LotSpectrum>> Spectra(Submission submission)
    {
        ImmutableArray<SpectrumRequest> requests = submission.Request.Spectra;
        if (requests.IsDefaultOrEmpty || requests.Length > MostSpectra)
        {
            return Problem.InvalidField("/spectra", $"Give 1 to {MostSpectra} spectra.");
        }

        var spectra = ImmutableArray.CreateBuilder<LotSpectrum>();
        for (int i = 0; i < requests.Length; i++)
        {
            SpectrumRequest? spectrum = requests[i];
            if (spectrum is null || string.IsNullOrWhiteSpace(spectrum.Name) || spectrum.Name.Length > 100)
            {
                return Problem.InvalidField($"/spectra/{i}/name", "A spectrum has a name of 1 to 100 characters.");
            }

            if (!Formats.Contains(spectrum.Format))
            {
                return Problem.InvalidField($"/spectra/{i}/format", $"Choose one of {string.Join(", ", Formats)}.");
            }

            Outcome<byte[]> bytes = Bytes(submission, spectrum, i);
            if (bytes.Problem is { } problem)
            {
                return problem;
            }

            spectra.Add(new LotSpectrum
            {
                LotId = "",
                Number = i + 1,
                Name = spectrum.Name,
                Format = spectrum.Format,
                Sha256 = Convert.ToHexStringLower(SHA256.HashData(bytes.Value!)),
                Bytes = bytes.Value!,
            });
        }

        return spectra.ToImmutable();
    }

    private static Outcome<byte[]> Bytes(Submission submission, SpectrumRequest spectrum, int index)
    {
        if (spectrum.Content is not { } content)
        {
            return submission.Files.TryGetValue(spectrum.Name, out byte[]? file)
                ? file
                : Problem.InvalidField($"/spectra/{index}/content", "Give the content, or send it as a part of the form under the spectrum's name.");
        }

        if (spectrum.Encoding == "text")
        {
            return Encoding.UTF8.GetBytes(content);
        }

        if (spectrum.Encoding != "base64")
        {
            return Problem.InvalidField($"/spectra/{index}/encoding", "Choose text or base64.");
        }

        byte[] buffer = new byte[content.Length];
        return Convert.TryFromBase64String(content, buffer, out int length)
            ? buffer[..length]
            : Problem.InvalidField($"/spectra/{index}/content", "This is not base64.");
    }

    private static AuditDraft Audit(
        Submission submission, Lot lot, Product product, SpecificationVersion specification, ImmutableArray<LotSpectrum> spectra) =>
        new(submission.Actor, "lot.submitted", "lot", lot.Id, After: new JsonObject
        {
            ["product"] = product.Code,
            ["lot"] = lot.LotNumber,
            ["sequence"] = lot.Sequence,
            ["specificationVersion"] = specification.Version,
            ["spectra"] = new JsonArray([.. spectra.Select(s => (JsonNode)new JsonObject { ["name"] = s.Name, ["sha256"] = s.Sha256 })]),
        });
}
