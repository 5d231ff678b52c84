using Microsoft.AspNetCore.Identity;

namespace Qc.Records.People;

/// <summary>A named account.</summary>
public sealed class Person : IdentityUser
{
    /// <summary>Name as printed beside a signature.</summary>
    public required string PrintedName { get; set; }

    /// <summary>False once the person has left; accounts are never removed or given to another.</summary>
    public bool IsActive { get; set; } = true;

    /// <summary>Whether the password must be changed at the next sign-in.</summary>
    public bool MustChangePassword { get; set; }
}

/// <summary>Roles, as the API names them.</summary>
public static class Roles
{
    /// <summary>Submits lots.</summary>
    public const string Submitter = "submitter";

    /// <summary>Decides on lots.</summary>
    public const string Reviewer = "reviewer";

    /// <summary>Sets up products and drafts specifications.</summary>
    public const string MethodOwner = "methodOwner";

    /// <summary>Approves specifications.</summary>
    public const string QualityUnit = "qualityUnit";

    /// <summary>Reads everything, changes nothing.</summary>
    public const string Auditor = "auditor";

    /// <summary>Manages accounts and keys.</summary>
    public const string Administrator = "administrator";

    /// <summary>All of them.</summary>
    public static IReadOnlyList<string> All { get; } = [Submitter, Reviewer, MethodOwner, QualityUnit, Auditor, Administrator];
}

/// <summary>A key of a LIMS; only a hash of its secret is kept.</summary>
public sealed class LimsKey
{
    /// <summary>Identifier, part of the key.</summary>
    public required string Id { get; init; }

    /// <summary>What it is for.</summary>
    public required string Name { get; init; }

    /// <summary>SHA-256 of the secret, lower-case hex.</summary>
    public required string SecretSha256 { get; init; }

    /// <summary>Scopes, separated by blanks.</summary>
    public required string Scopes { get; init; }

    /// <summary>When it ends, null for never.</summary>
    public DateTimeOffset? ExpiresAt { get; init; }

    /// <summary>When it was made.</summary>
    public required DateTimeOffset CreatedAt { get; init; }

    /// <summary>By whom.</summary>
    public required string CreatedBy { get; init; }
}

/// <summary>The end of a LIMS key.</summary>
public sealed class LimsKeyRevocation
{
    /// <summary>The key.</summary>
    public required string KeyId { get; init; }

    /// <summary>When.</summary>
    public required DateTimeOffset At { get; init; }

    /// <summary>By whom.</summary>
    public required string By { get; init; }
}
