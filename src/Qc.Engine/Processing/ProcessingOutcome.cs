namespace Qc.Engine.Processing;

/// <summary>What the caller knows before a measurement is processed.</summary>
public sealed record ProcessingOptions
{
    /// <summary>Solvent that the method prescribes, by our name; null where there is none.</summary>
    public string? PrescribedSolvent { get; init; }
}

/// <summary>A processed spectrum and what was seen on the way, for the suitability findings.</summary>
public sealed record ProcessingOutcome
{
    /// <summary>The spectrum, ready to be judged.</summary>
    public required Spectrum Spectrum { get; init; }

    /// <summary>Solvent of the header by our name; null where it is silent or not known.</summary>
    public string? HeaderSolvent { get; init; }

    /// <summary>Whether the solvent that the spectrum shows is another than header or method say.</summary>
    public bool SolventContradiction { get; init; }

    /// <summary>Phase error left after processing, in degrees; null where no line was fit to tell.</summary>
    public double? PhaseResidualDegrees { get; init; }

    /// <summary>Relaxation delay in seconds, where stated.</summary>
    public double? RelaxationDelaySeconds { get; init; }

    /// <summary>Acquisition time in seconds, where stated.</summary>
    public double? AcquisitionTimeSeconds { get; init; }

    /// <summary>Delay of the digital filter that was removed, in complex points; null for a processed spectrum.</summary>
    public double? GroupDelayPoints { get; init; }

    /// <summary>Whether that delay was derived from the data, the header being silent.</summary>
    public bool GroupDelayDerived { get; init; }
}
