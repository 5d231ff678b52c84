using System.Collections.Immutable;

namespace Qc.Service.Features.Lots;

/// <summary>Body of POST /api/v1/lots.</summary>
public sealed record LotRequest
{
    /// <summary>Code of the product.</summary>
    public required string Product { get; init; }

    /// <summary>Lot number.</summary>
    public required string Lot { get; init; }

    /// <summary>1 for the first measurement of the lot, 2 for the next; the first where left out.</summary>
    public int? Sequence { get; init; }

    /// <summary>When the sample was taken.</summary>
    public DateTimeOffset? SampledAt { get; init; }

    /// <summary>What was weighed.</summary>
    public SampleRequest? Sample { get; init; }

    /// <summary>Instrument.</summary>
    public string? Instrument { get; init; }

    /// <summary>Spectra.</summary>
    public required ImmutableArray<SpectrumRequest> Spectra { get; init; }

    /// <summary>Where to report the outcome.</summary>
    public string? Callback { get; init; }
}

/// <summary>What was weighed.</summary>
public sealed record SampleRequest
{
    /// <summary>Mass of the sample in mg.</summary>
    public double? MassMg { get; init; }

    /// <summary>Standard uncertainty of each weighing in mg; 0.01 where left out.</summary>
    public double? MassStandardUncertaintyMg { get; init; }

    /// <summary>The internal standard.</summary>
    public InternalStandardRequest? InternalStandard { get; init; }
}

/// <summary>An internal standard.</summary>
public sealed record InternalStandardRequest
{
    /// <summary>Its name: one of the known standards, or any name with <see cref="Smiles"/>.</summary>
    public required string Substance { get; init; }

    /// <summary>Its SMILES, where the name is not known.</summary>
    public string? Smiles { get; init; }

    /// <summary>Mass in mg.</summary>
    public required double MassMg { get; init; }

    /// <summary>Mass fraction in percent.</summary>
    public required double PurityPercent { get; init; }

    /// <summary>Its standard uncertainty.</summary>
    public double PurityStandardUncertaintyPercent { get; init; }
}

/// <summary>A spectrum.</summary>
public sealed record SpectrumRequest
{
    /// <summary>Name; in a form, the name of the part that holds the file.</summary>
    public required string Name { get; init; }

    /// <summary>"jcamp-dx", "nmrml" or "csv".</summary>
    public string Format { get; init; } = "jcamp-dx";

    /// <summary>The file, unless it comes as a part of the form.</summary>
    public string? Content { get; init; }

    /// <summary>"text" or "base64".</summary>
    public string Encoding { get; init; } = "text";
}
