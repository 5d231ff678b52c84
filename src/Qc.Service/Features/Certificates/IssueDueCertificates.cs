using Microsoft.EntityFrameworkCore;
using Qc.Records;
using Qc.Records.Audit;
using Qc.Records.Lots;
using Qc.Service.Http;

namespace Qc.Service.Features.Certificates;

/// <summary>
/// Issues certificates that are due and were not issued: a lot whose release is signed, where signing or storing the
/// certificate failed. Looks at the start and then at intervals; the lot waits as "reviewed" until it succeeds.
/// </summary>
internal sealed class IssueDueCertificates(IServiceScopeFactory scopes, IConfiguration configuration, ILogger<IssueDueCertificates> logger) : BackgroundService
{
    /// <summary>The request that released the lot is given this long to issue the certificate itself.</summary>
    private static readonly TimeSpan Grace = TimeSpan.FromSeconds(5);

    private readonly TimeSpan _interval = TimeSpan.FromSeconds(configuration.GetValue<double?>("Qc:CertificateRetrySeconds") ?? 60);

    protected override async Task ExecuteAsync(CancellationToken stoppingToken)
    {
        using var timer = new PeriodicTimer(_interval);
        do
        {
            try
            {
                await RunAsync(stoppingToken);
            }
            catch (Exception e) when (e is not OperationCanceledException)
            {
                // The database may be away for a while; the next round tries again.
                logger.LogError(e, "Looking for due certificates failed");
            }
        }
        while (await timer.WaitForNextTickAsync(stoppingToken));
    }

    private async Task RunAsync(CancellationToken cancellation)
    {
        List<string> due;
        await using (AsyncServiceScope scope = scopes.CreateAsyncScope())
        {
            QcDbContext context = scope.ServiceProvider.GetRequiredService<QcDbContext>();
            DateTimeOffset before = await context.DatabaseTimeAsync(cancellation) - Grace;
            due = await (
                from l in context.Lots
                let last = context.LotEvents.Where(e => e.LotId == l.Id).OrderByDescending(e => e.Id).First()
                where last.State == LotState.Reviewed && last.At < before
                select l.Id).ToListAsync(cancellation);
        }

        foreach (string lot in due)
        {
            await using AsyncServiceScope scope = scopes.CreateAsyncScope();
            try
            {
                Problem? problem = await scope.ServiceProvider.GetRequiredService<IssueCertificate>().IssueAsync(lot, "service", cancellation);
                logger.LogInformation("The due certificate of lot {LotId}: {Outcome}", lot, problem?.Detail ?? "issued");
            }
            catch (Exception e) when (e is not OperationCanceledException)
            {
                // One that fails must not hold up the others.
                logger.LogError(e, "The certificate of lot {LotId} is due and could not be issued; it is tried again", lot);
            }
        }
    }
}
