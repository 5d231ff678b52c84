namespace Qc.Engine.Verdicts;

/// <summary>
/// Acceptance criteria of a specification, complete: what the specification left out holds its default.
/// Defaults are starting values of ours, not of any standard.
/// </summary>
public sealed record Criteria
{
    /// <summary>Identity limits.</summary>
    public IdentityCriteria Identity { get; init; } = new();

    /// <summary>Limits on the measurement itself.</summary>
    public SuitabilityCriteria Suitability { get; init; } = new();

    /// <summary>Assay limits; null where no assay is asked for.</summary>
    public AssayCriteria? Assay { get; init; }

    /// <summary>Whether a passed lot may be released without a reviewer.</summary>
    public bool ReleaseByException { get; init; }
}

/// <summary>Limits for "is it what the label says".</summary>
public sealed record IdentityCriteria
{
    /// <summary>Shift tolerance with prediction only, in standard uncertainties.</summary>
    public double ShiftToleranceStandardUncertainties { get; init; } = 3;

    /// <summary>That tolerance is at least this many ppm.</summary>
    public double ShiftToleranceMinimumPpm { get; init; } = 0.15;

    /// <summary>That tolerance is at most this many ppm.</summary>
    public double ShiftToleranceMaximumPpm { get; init; } = 0.6;

    /// <summary>Shift tolerance with a reference lot, in ppm.</summary>
    public double ShiftToleranceReferencePpm { get; init; } = 0.03;

    /// <summary>Coupling tolerance with prediction only, in Hz.</summary>
    public double CouplingToleranceHertz { get; init; } = 1.5;

    /// <summary>Coupling tolerance with a reference lot, in Hz.</summary>
    public double CouplingToleranceReferenceHertz { get; init; } = 0.4;

    /// <summary>Proton-count tolerance with prediction only, in percent of the count.</summary>
    public double CountTolerancePercent { get; init; } = 20;

    /// <summary>That tolerance is at least this many protons.</summary>
    public double CountToleranceMinimumProtons { get; init; } = 0.3;

    /// <summary>Proton-count tolerance with a reference lot, in percent.</summary>
    public double CountToleranceReferencePercent { get; init; } = 10;

    /// <summary>Unaccounted signal allowed in one region, in mol % proton equivalents.</summary>
    public double UnaccountedRegionMolPercent { get; init; } = 3;

    /// <summary>Unaccounted signal allowed in all, in mol % proton equivalents.</summary>
    public double UnaccountedTotalMolPercent { get; init; } = 6;

    /// <summary>Unaccounted signal allowed in one region with a reference lot.</summary>
    public double UnaccountedRegionReferenceMolPercent { get; init; } = 1;

    /// <summary>Unaccounted signal allowed in all with a reference lot.</summary>
    public double UnaccountedTotalReferenceMolPercent { get; init; } = 2;

    /// <summary>A rival is told apart at this log10 evidence ratio.</summary>
    public double RivalLogEvidenceRatio { get; init; } = 3;

    /// <summary>
    /// Whether isomers are generated and join the test beside the rivals that the method owner named: those nearest to the
    /// expected structure, for small formulas all of them.
    /// </summary>
    public bool GeneratedRivals { get; init; } = true;

    /// <summary>Whether a rival that is not told apart flags the lot.</summary>
    public bool RivalsMustBeToldApart { get; init; } = true;
}

/// <summary>Limits for "is this measurement fit to be judged".</summary>
public sealed record SuitabilityCriteria
{
    /// <summary>Signal to noise of the product's largest multiplet, at least.</summary>
    public double SignalToNoise { get; init; } = 50;

    /// <summary>The same where an assay is asked for.</summary>
    public double SignalToNoiseAssay { get; init; } = 250;

    /// <summary>Line width at half height at 300 MHz and above, at most, in Hz.</summary>
    public double LineWidthHertz { get; init; } = 2.0;

    /// <summary>Line width at half height below 300 MHz, at most, in Hz.</summary>
    public double LineWidthLowFieldHertz { get; init; } = 2.5;

    /// <summary>Offset of the file's axis, at most, in ppm.</summary>
    public double AxisOffsetPpm { get; init; } = 0.10;

    /// <summary>Offset of the file's axis with a reference lot, at most, in ppm.</summary>
    public double AxisOffsetReferencePpm { get; init; } = 0.05;

    /// <summary>Phase error left, at most, in degrees.</summary>
    public double PhaseDegrees { get; init; } = 5;

    /// <summary>Digital resolution in line widths per point, at most.</summary>
    public double LineWidthsPerPoint { get; init; } = 0.5;
}

/// <summary>Assay limits in % (m/m).</summary>
public sealed record AssayCriteria
{
    /// <summary>Lowest accepted mass fraction, in percent.</summary>
    public double LowPercent { get; init; } = 98.0;

    /// <summary>Highest accepted mass fraction, in percent.</summary>
    public double HighPercent { get; init; } = 102.0;

    /// <summary>Guard band as a multiple of the expanded uncertainty (JCGM 106); 0 is simple acceptance.</summary>
    public double GuardBandMultiple { get; init; }

    /// <summary>
    /// Shortest time between scans that counts as full relaxation, in seconds: five times an assumed T1 of 6 s
    /// (common practice; T1 of maleic acid in D2O is 6 to 7 s by BIPM ISRD-01).
    /// </summary>
    public double RepetitionTimeSeconds { get; init; } = 30;
}
