using System.Collections.Immutable;
using Qc.Engine.Prediction;
using Qc.Engine.Processing;

namespace Qc.Engine.Fitting;

/// <summary>What a fit starts from.</summary>
public sealed record FitInput
{
    /// <summary>The spectrum.</summary>
    public required Spectrum Spectrum { get; init; }

    /// <summary>The expected substance.</summary>
    public required Expectation Product { get; init; }

    /// <summary>The internal standard, where one was weighed in.</summary>
    public Expectation? InternalStandard { get; init; }

    /// <summary>Its name.</summary>
    public string InternalStandardName { get; init; } = "";

    /// <summary>
    /// Share of the local signal that line-shape faults amount to in this spectrum, as the expected structure's fit showed
    /// it; structures are compared at the same share. Null: worked out from this fit.
    /// </summary>
    public double? MisfitShare { get; init; }

    /// <summary>Residual solvent, water, reference and common impurities in the solvent of the spectrum.</summary>
    public ImmutableArray<KnownSubstance> Known { get; init; } = [];
}
