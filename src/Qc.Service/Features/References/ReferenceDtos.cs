using System.Text.Json.Serialization;
using Qc.Engine.Verdicts;

namespace Qc.Service.Features.References;

/// <summary>Body of POST /api/v1/products/{code}/reference.</summary>
public sealed record ReferenceRequest
{
    /// <summary>Identifier of the checked lot.</summary>
    public required string Lot { get; init; }
}

/// <summary>Body of a release or a withdrawal: the password again, as electronic signature.</summary>
public sealed record ReferenceSigningRequest
{
    /// <summary>The signer's password.</summary>
    public required string Password { get; init; }
}

/// <summary>A reference lot as answered.</summary>
public sealed record ReferenceDto
{
    /// <summary>Number within the product.</summary>
    public required int Number { get; init; }

    /// <summary>"proposed", "released" or "withdrawn".</summary>
    public required string State { get; init; }

    /// <summary>Whether lots are judged against it now.</summary>
    public required bool InForce { get; init; }

    /// <summary>Identifier of the lot.</summary>
    public required string Lot { get; init; }

    /// <summary>Number of the lot.</summary>
    public required string LotNumber { get; init; }

    /// <summary>Solvent, shifts and couplings.</summary>
    public required FittedConstants Constants { get; init; }

    /// <summary>When it was proposed.</summary>
    public required DateTimeOffset ProposedAt { get; init; }

    /// <summary>By whom.</summary>
    public required string ProposedBy { get; init; }

    /// <summary>When it was released.</summary>
    [JsonIgnore(Condition = JsonIgnoreCondition.WhenWritingNull)]
    public DateTimeOffset? ReleasedAt { get; init; }

    /// <summary>By whom.</summary>
    [JsonIgnore(Condition = JsonIgnoreCondition.WhenWritingNull)]
    public string? ReleasedBy { get; init; }
}
