using System.Collections.Immutable;
using System.Globalization;
using System.Text.Json;
using System.Text.Json.Nodes;
using Microsoft.EntityFrameworkCore;
using Npgsql;
using Qc.Engine.Verdicts;
using Qc.Evidence;
using Qc.Records;
using Qc.Records.Audit;
using Qc.Records.Lots;
using Qc.Records.Reviews;
using Qc.Service.Features.Callbacks;
using Qc.Service.Features.Certificates;
using Qc.Service.Features.Lots;
using Qc.Service.Features.People;
using Qc.Service.Http;
using Wolverine.EntityFrameworkCore;

namespace Qc.Service.Features.Reviews;

/// <summary>Body of POST /api/v1/lots/{id}/reviews.</summary>
public sealed record ReviewRequest
{
    /// <summary>"release", "reject" or "remeasure".</summary>
    public required string Decision { get; init; }

    /// <summary>Why.</summary>
    public required string Reason { get; init; }

    /// <summary>The reviewer's password, entered again: this is the signature.</summary>
    public string? Password { get; init; }

    /// <summary>Decisions on single findings; where left out, a release accepts every flag.</summary>
    public ImmutableArray<FindingDecision> Findings { get; init; } = [];
}

/// <summary>A decision on one finding.</summary>
public sealed record FindingDecision
{
    /// <summary>Criterion of the finding.</summary>
    public required string Criterion { get; init; }

    /// <summary>Its subject.</summary>
    public required string Subject { get; init; }

    /// <summary>Whether the reviewer accepts it.</summary>
    public required bool Accepted { get; init; }

    /// <summary>A comment.</summary>
    public string? Comment { get; init; }
}

/// <summary>Records a person's signed decision on a lot.</summary>
public sealed class DecideLot(
    QcDbContext context, IDbContextOutbox<QcDbContext> outbox, ReadLots lots, SigningDesk desk, IssueCertificate certificates,
    ILogger<DecideLot> logger)
{
    private static readonly string[] Decisions = ["release", "reject", "remeasure"];
    private static readonly string[] Decidable = [LotState.Checked, LotState.Unreadable];

    /// <summary>Entity tag of a lot: what is answered of it changes with its state and with each decision only.</summary>
    public static string Tag(string state, int reviews) => $"\"{state}-{reviews.ToString(CultureInfo.InvariantCulture)}\"";

    /// <summary>Decides.</summary>
    /// <param name="lotId">The lot.</param>
    /// <param name="request">The decision.</param>
    /// <param name="user">The reviewer.</param>
    /// <param name="ifMatch">Entity tag the reviewer saw, null where none was sent.</param>
    /// <param name="cancellation">Gives up.</param>
    public async Task<Outcome<LotDto>> RunAsync(string lotId, ReviewRequest request, string user, string? ifMatch, CancellationToken cancellation)
    {
        Lot? lot = await context.Lots.AsNoTracking().SingleOrDefaultAsync(l => l.Id == lotId, cancellation);
        if (lot is null)
        {
            return Problem.NotFound("lot");
        }

        if (Check(request) is { } wrong)
        {
            return wrong;
        }

        if (lot.SubmittedBy == $"person:{user}")
        {
            return Problem.NotAllowed("Nobody decides on a lot that they submitted; another reviewer must.");
        }

        int before = await context.Reviews.CountAsync(r => r.LotId == lotId, cancellation);
        string state = await lots.StateAsync(lotId, cancellation);
        if (ifMatch is not null && !ifMatch.Split(',', StringSplitOptions.TrimEntries).Any(tag => tag == "*" || tag == Tag(state, before)))
        {
            return Problem.Changed("The lot changed since it was read, perhaps by another reviewer; read it again.");
        }

        Computation? computation = await context.Computations.AsNoTracking().Where(c => c.LotId == lotId).OrderByDescending(c => c.Number).FirstOrDefaultAsync(cancellation);
        if (computation is null || !Decidable.Contains(state))
        {
            return Problem.Conflict("not-decidable", "There is nothing to decide", $"The lot is {state}; only a checked or unreadable lot waits for a decision.");
        }

        FlaggedFinding[] flags = Flags(computation);
        if (request.Decision == "release" && ReleaseObstacle(request, computation, flags) is { } obstacle)
        {
            return obstacle;
        }

        if (await desk.RefuseAsync(user, request.Password!) is { } refused)
        {
            return refused;
        }

        return await RecordAsync(lot, computation, request, flags, user, before, cancellation);
    }

    /// <summary>Flagged findings of a computation.</summary>
    public static FlaggedFinding[] Flags(Computation computation) =>
    [
        .. LotMapping.Report(computation).Findings
            .Where(f => f.Outcome == Outcome.Flag)
            .Select(f => new FlaggedFinding(f.Criterion, f.Subject))
            .Distinct(),
    ];

    /// <summary>What a reviewer signs, as JSON: the decision and the hash of the report that was shown.</summary>
    public static string ContentJson(string lotId, string reportSha256, string decision, string reason, string findingsJson) => new JsonObject
    {
        ["lotId"] = lotId,
        ["reportSha256"] = reportSha256,
        ["decision"] = decision,
        ["reason"] = reason,
        ["findings"] = JsonNode.Parse(findingsJson),
    }.ToJsonString();

    private async Task<Outcome<LotDto>> RecordAsync(
        Lot lot, Computation computation, ReviewRequest request, FlaggedFinding[] flags, string user, int before, CancellationToken cancellation)
    {
        string actor = $"person:{user}";
        FindingDecision[] decisions = request.Findings.IsDefaultOrEmpty && request.Decision == "release"
            ? [.. flags.Select(f => new FindingDecision { Criterion = f.Criterion, Subject = f.Subject, Accepted = true })]
            : [.. request.Findings];
        string findingsJson = JsonSerializer.Serialize(decisions, Json.Options);
        string meaning = request.Decision switch { "release" => SignatureMeaning.Approved, "reject" => SignatureMeaning.Rejected, _ => SignatureMeaning.Reviewed };
        string state = request.Decision switch { "release" => LotState.Reviewed, "reject" => LotState.Rejected, _ => LotState.Remeasure };
        await using (var transaction = await context.Database.BeginTransactionAsync(cancellation))
        {
            DateTimeOffset now = await context.DatabaseTimeAsync(cancellation);
            Signature signature = await desk.SignAsync(
                user,
                meaning,
                "lot",
                lot.Id,
                ContentJson(lot.Id, computation.ReportSha256, request.Decision, request.Reason, findingsJson),
                now,
                cancellation);
            try
            {
                await context.SaveChangesAsync(cancellation);
                context.Reviews.Add(new Review
                {
                    Id = Ids.New(now),
                    LotId = lot.Id,
                    Number = before + 1,
                    ComputationId = computation.Id,
                    Decision = request.Decision,
                    Reason = request.Reason,
                    FindingsJson = findingsJson,
                    At = now,
                    By = actor,
                    SignatureId = signature.Id,
                });
                context.LotEvents.Add(new LotEvent { LotId = lot.Id, State = state, At = now, By = actor });
                await context.SaveWithAuditAsync(
                    [
                        new AuditDraft(actor, $"lot.{request.Decision}", "lot", lot.Id, request.Reason, After: new JsonObject
                        {
                            ["reportSha256"] = computation.ReportSha256,
                            ["signature"] = JsonNode.Parse(signature.StatementJson),
                        }),
                    ],
                    cancellation);
                await ReportOutcome.PublishAsync(outbox, lot);
                await outbox.SaveChangesAndFlushMessagesAsync(cancellation); // Commits.
            }
            catch (DbUpdateException e) when (e.InnerException is PostgresException { SqlState: PostgresErrorCodes.UniqueViolation })
            {
                return Problem.Changed("Another reviewer decided on this lot at the same time; read it again.");
            }
        }

        if (request.Decision == "release" && await IssueAsync(lot.Id, actor, cancellation) is { } problem)
        {
            return problem;
        }

        return await lots.OneAsync(lot.Id, cancellation);
    }

    /// <summary>The signed release stands where issuing fails: <see cref="IssueDueCertificates"/> tries again.</summary>
    private async Task<Problem?> IssueAsync(string lotId, string actor, CancellationToken cancellation)
    {
        try
        {
            return await certificates.IssueAsync(lotId, actor, cancellation);
        }
        catch (Exception e) when (e is not OperationCanceledException)
        {
            logger.LogError(e, "Lot {LotId} is released and its certificate could not be issued; it is tried again", lotId);
            context.ChangeTracker.Clear();
            return null;
        }
    }

    private static Problem? Check(ReviewRequest request)
    {
        var errors = new List<FieldError>();
        if (!Decisions.Contains(request.Decision))
        {
            errors.Add(new FieldError("/decision", $"Choose one of {string.Join(", ", Decisions)}."));
        }

        if (string.IsNullOrWhiteSpace(request.Reason) || request.Reason.Length > 4000)
        {
            errors.Add(new FieldError("/reason", "Give a reason of 1 to 4000 characters."));
        }

        if (string.IsNullOrEmpty(request.Password))
        {
            errors.Add(new FieldError("/password", "Enter your password again: it is your signature."));
        }

        for (int i = 0; i < (request.Findings.IsDefault ? 0 : request.Findings.Length); i++)
        {
            if (request.Findings[i] is null)
            {
                errors.Add(new FieldError($"/findings/{i}", "A decision names criterion and subject."));
            }
        }

        return errors.Count == 0 ? null : Problem.Invalid("invalid-field", "A field is wrong", errors[0].Detail, [.. errors]);
    }

    private static Problem? ReleaseObstacle(ReviewRequest request, Computation computation, FlaggedFinding[] flags)
    {
        if (computation.Unreadable || computation.Unsuitable)
        {
            return Problem.Conflict(
                "not-releasable",
                "The lot cannot be released on this measurement",
                computation.Unreadable ? "The spectrum could not be read; ask for a re-measurement." : "The measurement was not fit to be judged; ask for a re-measurement.");
        }

        if (request.Findings.IsDefaultOrEmpty)
        {
            return null;
        }

        FlaggedFinding[] open = [.. flags.Except(request.Findings.Where(f => f.Accepted).Select(f => new FlaggedFinding(f.Criterion, f.Subject)))];
        return open.Length == 0
            ? null
            : Problem.InvalidField("/findings", $"A release accepts every flag; {open[0].Criterion} of {open[0].Subject} is not accepted.");
    }
}
