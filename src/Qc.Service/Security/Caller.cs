using System.Security.Claims;

namespace Qc.Service.Security;

/// <summary>Who sent a request, as records name them.</summary>
public static class Caller
{
    /// <summary>Claim that marks a LIMS key, holding its id.</summary>
    public const string KeyClaim = "qc:key";

    /// <summary>Claim of a key's scope.</summary>
    public const string ScopeClaim = "qc:scope";

    /// <summary>"person:{user}" or "key:{id}".</summary>
    public static string Name(ClaimsPrincipal principal) =>
        principal.FindFirstValue(KeyClaim) is { } key ? $"key:{key}" : $"person:{principal.Identity?.Name}";

    /// <summary>Whether the caller is a signed-in person.</summary>
    public static bool IsPerson(ClaimsPrincipal principal) =>
        principal.Identity?.IsAuthenticated == true && principal.FindFirstValue(KeyClaim) is null;
}
