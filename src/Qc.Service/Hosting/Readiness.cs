using Microsoft.EntityFrameworkCore;
using Microsoft.Extensions.Diagnostics.HealthChecks;
using Qc.Chemistry;
using Qc.Records;

namespace Qc.Service.Hosting;

/// <summary>Ready: the database answers, structures can be read, and what is to be loaded at the start is loaded.</summary>
public sealed class Readiness(IServiceScopeFactory scopes, IStructureReader structures) : IHealthCheck
{
    /// <summary>Set once the start is over.</summary>
    public bool IsLoaded { get; set; }

    /// <inheritdoc/>
    public async Task<HealthCheckResult> CheckHealthAsync(HealthCheckContext context, CancellationToken cancellationToken = default)
    {
        if (!IsLoaded)
        {
            return HealthCheckResult.Unhealthy("starting");
        }

        try
        {
            await using AsyncServiceScope scope = scopes.CreateAsyncScope();
            await scope.ServiceProvider.GetRequiredService<QcDbContext>().Database.ExecuteSqlRawAsync("SELECT 1", cancellationToken);
        }
        catch (Npgsql.NpgsqlException)
        {
            return HealthCheckResult.Unhealthy("the database does not answer");
        }

        return structures.ReadSmiles("CCO").Structure is null
            ? HealthCheckResult.Unhealthy("structures cannot be read")
            : HealthCheckResult.Healthy();
    }
}
