using System.Threading.RateLimiting;
using Microsoft.AspNetCore.RateLimiting;
using Qc.Service.Http;

namespace Qc.Service.Security;

/// <summary>Limits for what is open to strangers: signing in and checking a certificate.</summary>
internal static class RateLimits
{
    /// <summary>By network address: 120 requests a minute.</summary>
    public const string Strangers = "strangers";

    /// <summary>Adds them.</summary>
    public static void Add(RateLimiterOptions options)
    {
        options.AddPolicy(Strangers, context => RateLimitPartition.GetSlidingWindowLimiter(
            context.Connection.RemoteIpAddress?.ToString() ?? "",
            _ => new SlidingWindowRateLimiterOptions { PermitLimit = 120, Window = TimeSpan.FromMinutes(1), SegmentsPerWindow = 6, QueueLimit = 0 }));
        options.OnRejected = async (rejected, _) =>
        {
            rejected.HttpContext.Response.Headers.RetryAfter = "60";
            await Problem.TooMany().ToResult().ExecuteAsync(rejected.HttpContext);
        };
    }
}
