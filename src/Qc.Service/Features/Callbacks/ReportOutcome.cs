using Microsoft.EntityFrameworkCore;
using Qc.Records;
using Qc.Records.Lots;
using Qc.Service.Features.Lots;
using Wolverine;
using Wolverine.Attributes;

namespace Qc.Service.Features.Callbacks;

/// <summary>Asks a worker to tell the LIMS what has become of a lot; kept in the database until it is done.</summary>
/// <param name="LotId">The lot.</param>
public sealed record ReportOutcome(string LotId)
{
    /// <summary>Puts the message into an outbox where the submitter of the lot asked to be called.</summary>
    public static ValueTask PublishAsync(IMessageBus outbox, Lot lot) =>
        lot.CallbackUrl is null ? ValueTask.CompletedTask : outbox.PublishAsync(new ReportOutcome(lot.Id));
}

/// <summary>
/// Takes <see cref="ReportOutcome"/> from the queue. What is sent is the lot as it is then; a LIMS may get the same state
/// twice, and must take that well.
/// </summary>
[ScheduleRetry(typeof(HttpRequestException), 5, 60, 600, 3600, 21600)]
public static class ReportOutcomeHandler
{
    /// <summary>Sends the lot.</summary>
    public static async Task Handle(ReportOutcome message, IServiceScopeFactory scopes, CallbackSender sender, CancellationToken cancellation)
    {
        await using AsyncServiceScope scope = scopes.CreateAsyncScope();
        QcDbContext context = scope.ServiceProvider.GetRequiredService<QcDbContext>();
        string? address = await context.Lots.Where(l => l.Id == message.LotId).Select(l => l.CallbackUrl).SingleAsync(cancellation);
        LotDto lot = (await scope.ServiceProvider.GetRequiredService<ReadLots>().OneAsync(message.LotId, cancellation)).Value!;
        await sender.SendAsync(new Uri(address!), lot, cancellation);
    }
}
