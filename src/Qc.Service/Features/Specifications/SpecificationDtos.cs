using System.Collections.Immutable;
using System.Text.Json.Serialization;
using Qc.Engine.Verdicts;

namespace Qc.Service.Features.Specifications;

/// <summary>Body of POST /api/v1/products/{code}/specifications. Whatever is left out takes its default; {} is complete.</summary>
public sealed record SpecificationRequest
{
    /// <summary>Identity limits.</summary>
    public IdentityCriteria Identity { get; init; } = new();

    /// <summary>Limits on the measurement.</summary>
    public SuitabilityCriteria Suitability { get; init; } = new();

    /// <summary>Assay limits; left out where no assay is asked for.</summary>
    public AssayCriteria? Assay { get; init; }

    /// <summary>Whether a passed lot may be released without a reviewer.</summary>
    public bool ReleaseByException { get; init; }

    /// <summary>Mix-ups to be told apart, by structure.</summary>
    public ImmutableArray<NamedRival> Rivals { get; init; } = [];

    /// <summary>From when the version holds once approved; at once where left out.</summary>
    public DateTimeOffset? EffectiveFrom { get; init; }
}

/// <summary>A mix-up that the method owner names.</summary>
public sealed record NamedRival
{
    /// <summary>Its name.</summary>
    public required string Name { get; init; }

    /// <summary>Its SMILES.</summary>
    public required string Smiles { get; init; }
}

/// <summary>A specification version as answered: complete, nothing hidden.</summary>
public sealed record SpecificationDto
{
    /// <summary>Version, from 1.</summary>
    public required int Version { get; init; }

    /// <summary>"draft", "approved" (in force now or later) or "retired".</summary>
    public required string State { get; init; }

    /// <summary>The criteria with every default filled in.</summary>
    public required Criteria Criteria { get; init; }

    /// <summary>Mix-ups to be told apart.</summary>
    public required ImmutableArray<NamedRival> Rivals { get; init; }

    /// <summary>When it was drafted.</summary>
    public required DateTimeOffset DraftedAt { get; init; }

    /// <summary>By whom.</summary>
    public required string DraftedBy { get; init; }

    /// <summary>From when it holds.</summary>
    [JsonIgnore(Condition = JsonIgnoreCondition.WhenWritingNull)]
    public DateTimeOffset? EffectiveFrom { get; init; }

    /// <summary>When it was approved.</summary>
    [JsonIgnore(Condition = JsonIgnoreCondition.WhenWritingNull)]
    public DateTimeOffset? ApprovedAt { get; init; }

    /// <summary>By whom.</summary>
    [JsonIgnore(Condition = JsonIgnoreCondition.WhenWritingNull)]
    public string? ApprovedBy { get; init; }

    /// <summary>Where the numbers come from.</summary>
    public string Note { get; init; } = "Limits that were left out hold default values: starting values of this service, not of any standard.";
}
