using System.Text.Json.Nodes;
using System.Threading.RateLimiting;
using Qc.Records;
using Qc.Records.Audit;

namespace Qc.Service.Security;

/// <summary>
/// Sign-ins, sign-outs and refusals in the audit log (21 CFR 11.300(d)). Each is a transaction of its own, whatever becomes of
/// the request. Whoever floods is written down at most 300 times a minute; the next entry then says how many it stands for.
/// </summary>
public sealed class AccessLog(IServiceScopeFactory scopes) : IDisposable
{
    private const int LongestSubject = 200;

    private readonly PartitionedRateLimiter<string> _limiter = PartitionedRateLimiter.Create<string, string>(who => RateLimitPartition.GetFixedWindowLimiter(
        who, _ => new FixedWindowRateLimiterOptions { PermitLimit = 300, Window = TimeSpan.FromMinutes(1), QueueLimit = 0 }));

    private int _left;

    /// <summary>Somebody whom the request does not name.</summary>
    public const string Nobody = "anonymous";

    /// <summary>Writes an entry.</summary>
    /// <param name="context">The request.</param>
    /// <param name="actor">Who, as records name them, or <see cref="Nobody"/>.</param>
    /// <param name="action">What, e.g. "session.refused".</param>
    /// <param name="subjectType">Kind of subject.</param>
    /// <param name="subjectId">Subject; cut where it is long.</param>
    /// <param name="why">Why it was refused.</param>
    public async Task NoteAsync(HttpContext context, string actor, string action, string subjectType, string subjectId, string? why = null)
    {
        string address = context.Connection.RemoteIpAddress?.ToString() ?? "";
        using RateLimitLease lease = _limiter.AttemptAcquire(actor == Nobody ? address : actor);
        if (!lease.IsAcquired)
        {
            Interlocked.Increment(ref _left);
            return;
        }

        var after = new JsonObject { ["address"] = address, ["method"] = context.Request.Method };
        if (Interlocked.Exchange(ref _left, 0) is > 0 and var left)
        {
            after["notWrittenBefore"] = left;
        }

        await using AsyncServiceScope scope = scopes.CreateAsyncScope();
        QcDbContext records = scope.ServiceProvider.GetRequiredService<QcDbContext>();
        await using var transaction = await records.Database.BeginTransactionAsync(CancellationToken.None);
        string subject = subjectId.Length > LongestSubject ? subjectId[..LongestSubject] : subjectId;
        await records.SaveWithAuditAsync([new AuditDraft(actor, action, subjectType, subject, why, After: after)], CancellationToken.None);
        await transaction.CommitAsync(CancellationToken.None);
    }

    /// <inheritdoc/>
    public void Dispose() => _limiter.Dispose();
}
