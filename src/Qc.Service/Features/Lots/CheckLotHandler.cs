using System.Collections.Immutable;
using System.Diagnostics;
using System.Runtime.InteropServices;
using System.Text.Json;
using System.Text.Json.Nodes;
using Microsoft.EntityFrameworkCore;
using Qc.Chemistry;
using Qc.Engine.Reading;
using Qc.Engine.Verdicts;
using Qc.Evidence;
using Qc.Records;
using Qc.Records.Audit;
using Qc.Records.Lots;
using Qc.Records.Products;
using Qc.Service.Features.Callbacks;
using Qc.Service.Features.Certificates;
using Qc.Service.Features.References;
using Qc.Service.Features.Specifications;
using Qc.Service.Hosting;
using Qc.Service.Http;
using Wolverine.EntityFrameworkCore;

namespace Qc.Service.Features.Lots;

/// <summary>Checks a lot. Run twice for the same lot, the second run finds the computation and does nothing.</summary>
public sealed class LotChecker(
    QcDbContext context,
    IDbContextOutbox<QcDbContext> outbox,
    IStructureReader structures,
    LotWaiters waiters,
    IssueCertificate certificates,
    QcMetrics metrics,
    ILogger<LotChecker> logger)
{
    private const string Service = "service";

    /// <summary>Checks the lot and records computation, curves, state and audit entry in one transaction.</summary>
    public async Task RunAsync(string lotId, CancellationToken cancellation)
    {
        if (!await context.Computations.AnyAsync(c => c.LotId == lotId, cancellation))
        {
            await BeginAsync(lotId, cancellation);
            await CheckAsync(lotId, cancellation);
        }

        await certificates.ReleaseByExceptionAsync(lotId, cancellation);
        waiters.Done(lotId);
    }

    private async Task BeginAsync(string lotId, CancellationToken cancellation)
    {
        await using var transaction = await context.Database.BeginTransactionAsync(cancellation);
        context.LotEvents.Add(new LotEvent { LotId = lotId, State = LotState.Checking, At = await context.DatabaseTimeAsync(cancellation), By = Service });
        await context.SaveWithAuditAsync([new AuditDraft(Service, "lot.checking", "lot", lotId)], cancellation);
        await transaction.CommitAsync(cancellation);
    }

    private async Task CheckAsync(string lotId, CancellationToken cancellation)
    {
        Lot lot = await context.Lots.AsNoTracking().SingleAsync(l => l.Id == lotId, cancellation);
        Product product = await context.Products.AsNoTracking().SingleAsync(p => p.Id == lot.ProductId, cancellation);
        SpecificationVersion specification = await context.SpecificationVersions.AsNoTracking().SingleAsync(s => s.Id == lot.SpecificationId, cancellation);
        List<LotSpectrum> spectra = await context.LotSpectra.AsNoTracking().Where(s => s.LotId == lotId).OrderBy(s => s.Number).ToListAsync(cancellation);
        ProductReference? reference = await context.ReferenceInForceAsync(product.Id, lot.SubmittedAt, cancellation);
        CheckRequest request = Request(lot, product, specification, spectra) with
        {
            Reference = reference is null ? null : await context.ReferenceLotAsync(reference, cancellation),
        };
        var watch = Stopwatch.StartNew();
        CheckReport report = LotCheck.Run(request, cancellation);
        watch.Stop();
        logger.LogInformation(
            "Lot {LotId} checked in {Milliseconds} ms: {Verdict}", lotId, watch.ElapsedMilliseconds, report.Unreadable ? "unreadable" : report.Verdict);
        await RecordAsync(lot, product, specification, reference, spectra, report, watch.Elapsed.TotalMilliseconds, cancellation);
        metrics.Checked(report, watch.Elapsed);
    }

    private CheckRequest Request(Lot lot, Product product, SpecificationVersion specification, List<LotSpectrum> spectra)
    {
        SampleRequest? sample = lot.SampleJson is null ? null : JsonSerializer.Deserialize<SampleRequest>(lot.SampleJson, Json.Options);
        return new CheckRequest
        {
            ProductName = product.Name,
            Product = Structure(product.Name, product.Smiles),
            Solvent = product.Solvent,
            Nucleus = product.Nucleus,
            Criteria = SpecificationQueries.Criteria(specification),
            Rivals = [.. SpecificationQueries.Rivals(specification).Select(r => Structure(r.Name, r.Smiles))],
            Sample = sample is null ? null : Sample(sample),
            Spectra = [.. spectra.Select(s => new SubmittedSpectrum(s.Name, Format(s.Format), s.Bytes))],
        };
    }

    private SampleFacts Sample(SampleRequest sample) => new(
        sample.MassMg,
        sample.MassStandardUncertaintyMg ?? 0.01,
        sample.InternalStandard is not { } standard
            ? null
            : new InternalStandard(
                Structure(standard.Substance, standard.Smiles ?? InternalStandards.Find(standard.Substance)!),
                standard.MassMg,
                standard.PurityPercent,
                standard.PurityStandardUncertaintyPercent));

    private NamedStructure Structure(string name, string smiles)
    {
        StructureResult read = structures.ReadSmiles(smiles);
        return read.Structure is { } structure
            ? new NamedStructure(name, structure.Smiles, structure.Molecule)
            : throw new InvalidOperationException($"The stored structure {smiles} cannot be read: {read.Error!.Message}");
    }

    private static SpectrumFormat Format(string format) => format switch
    {
        "nmrml" => SpectrumFormat.NmrMl,
        "csv" => SpectrumFormat.Csv,
        _ => SpectrumFormat.JcampDx,
    };

    private async Task RecordAsync(
        Lot lot,
        Product product,
        SpecificationVersion specification,
        ProductReference? reference,
        List<LotSpectrum> spectra,
        CheckReport report,
        double milliseconds,
        CancellationToken cancellation)
    {
        await using var transaction = await context.Database.BeginTransactionAsync(cancellation);
        DateTimeOffset now = await context.DatabaseTimeAsync(cancellation);
        CheckReport stored = report with { Spectra = [.. report.Spectra.Select(s => s with { Traces = null })] };
        string reportJson = JsonSerializer.Serialize(stored, Json.Options);
        var asked = new JsonObject
        {
            ["smiles"] = product.Smiles,
            ["solvent"] = product.Solvent,
            ["criteria"] = JsonNode.Parse(specification.CriteriaJson),
            ["rivals"] = JsonNode.Parse(specification.RivalsJson),
            ["reference"] = reference is null ? null : JsonNode.Parse(reference.ConstantsJson),
            ["sample"] = lot.SampleJson is null ? null : JsonNode.Parse(lot.SampleJson),
            ["spectra"] = new JsonArray([.. spectra.Select(s => (JsonNode)s.Sha256)]),
        };
        var computation = new Computation
        {
            Id = Ids.New(now),
            LotId = lot.Id,
            Number = 1,
            EngineVersion = report.EngineVersion,
            Verdict = report.Unreadable ? null : report.Verdict == Outcome.Pass ? "pass" : "flag",
            Unreadable = report.Unreadable,
            Unsuitable = report.Unsuitable,
            Summary = report.Summary,
            ReportJson = reportJson,
            ReportSha256 = SignatureStatement.HashOfContent(reportJson),
            RequestSha256 = SignatureStatement.HashOfContent(asked.ToJsonString()),
            DurationMilliseconds = milliseconds,
            At = now,
        };
        context.Computations.Add(computation);
        await context.SaveChangesAsync(cancellation);
        context.Traces.AddRange(report.Spectra.Select((s, i) => (Trace: s.Traces, Number: i + 1)).Where(t => t.Trace is not null).Select(t => new Records.Lots.Trace
        {
            ComputationId = computation.Id,
            SpectrumNumber = t.Number,
            FirstPpm = t.Trace!.FirstPpm,
            PpmPerPoint = t.Trace.PpmPerPoint,
            Count = t.Trace.Measured.Length,
            Measured = Bytes(t.Trace.Measured),
            Modelled = Bytes(t.Trace.Modelled),
        }));
        string state = report.Unreadable ? LotState.Unreadable : LotState.Checked;
        context.LotEvents.Add(new LotEvent { LotId = lot.Id, State = state, At = now, By = Service });
        await context.SaveWithAuditAsync(
            [
                new AuditDraft(Service, $"lot.{state}", "lot", lot.Id, After: new JsonObject
                {
                    ["verdict"] = computation.Verdict,
                    ["engineVersion"] = computation.EngineVersion,
                    ["reportSha256"] = computation.ReportSha256,
                    ["requestSha256"] = computation.RequestSha256,
                }),
            ],
            cancellation);
        await ReportOutcome.PublishAsync(outbox, lot);
        await outbox.SaveChangesAndFlushMessagesAsync(cancellation); // Commits.
    }

    /// <summary>Little-endian 32-bit floats, as the column's doc says.</summary>
    private static byte[] Bytes(float[] values)
    {
        if (!BitConverter.IsLittleEndian)
        {
            throw new PlatformNotSupportedException("Curves are stored little-endian; this machine is not.");
        }

        return MemoryMarshal.AsBytes(values.AsSpan()).ToArray();
    }
}

/// <summary>Takes <see cref="CheckLot"/> from the queue.</summary>
public static class CheckLotHandler
{
    /// <summary>Handles it.</summary>
    public static Task Handle(CheckLot message, LotChecker checker, CancellationToken cancellation) => checker.RunAsync(message.LotId, cancellation);
}
