using System.Collections.Immutable;
using Qc.Engine.Prediction;
using Qc.Engine.Processing;
using Qc.Engine.Reading;
using Qc.Engine.Values;

namespace Qc.Engine.Verdicts;

/// <summary>Outcome of one criterion, or of all. The engine never says "fail": only a person rejects a lot.</summary>
public enum Outcome
{
    /// <summary>Within the limit.</summary>
    Pass,

    /// <summary>A person must look.</summary>
    Flag,
}

/// <summary>What one acceptance criterion found.</summary>
/// <param name="Criterion">Stable id, e.g. "identity.shift", "suitability.lineWidth".</param>
/// <param name="Subject">What it is about: a group name, a region, or the spectrum's name.</param>
/// <param name="Statement">One plain sentence.</param>
/// <param name="Outcome">Pass or flag.</param>
/// <param name="Observed">Observed value, where there is one.</param>
/// <param name="StandardUncertainty">Its standard uncertainty.</param>
/// <param name="Low">Lower limit, where there is one.</param>
/// <param name="High">Upper limit, where there is one.</param>
/// <param name="Unit">Unit of the three, e.g. "ppm", "Hz", "H", "mol %".</param>
/// <param name="RegionsPpm">Where in the spectrum.</param>
public sealed record Finding(
    string Criterion,
    string Subject,
    string Statement,
    Outcome Outcome,
    double? Observed = null,
    double? StandardUncertainty = null,
    double? Low = null,
    double? High = null,
    string Unit = "",
    ImmutableArray<Interval> RegionsPpm = default)
{
    /// <summary>Where in the spectrum; empty where it concerns the whole.</summary>
    public ImmutableArray<Interval> RegionsPpm { get; init; } = RegionsPpm.IsDefault ? [] : RegionsPpm;
}

/// <summary>One line of the proton ledger: a group expected, and what was found of it.</summary>
public sealed record LedgerLine
{
    /// <summary>Group name, e.g. "H-4".</summary>
    public required string Group { get; init; }

    /// <summary>Atom numbers (from 1) that bear the protons.</summary>
    public required ImmutableArray<int> Atoms { get; init; }

    /// <summary>Protons expected.</summary>
    public required double ExpectedCount { get; init; }

    /// <summary>Protons found; null where the group was not measured or is not asserted.</summary>
    public double? ObservedCount { get; init; }

    /// <summary>Expected shift.</summary>
    public required double ExpectedPpm { get; init; }

    /// <summary>Its standard uncertainty.</summary>
    public required double ExpectedStandardUncertaintyPpm { get; init; }

    /// <summary>Shift found.</summary>
    public double? ObservedPpm { get; init; }

    /// <summary>Region where it was found.</summary>
    public Interval? RegionPpm { get; init; }

    /// <summary>Splitting as the trade writes it: "s", "d", "t", "q", "dd", "m"; second order is "m".</summary>
    public string Splitting { get; init; } = "";

    /// <summary>Couplings in Hz, largest first.</summary>
    public ImmutableArray<double> CouplingsHz { get; init; } = [];

    /// <summary>What the expected shift rests on.</summary>
    public required Basis Basis { get; init; }

    /// <summary>Whether the group exchanges: never asserted in shift, width or count.</summary>
    public bool Exchangeable { get; init; }

    /// <summary>A remark in one plain sentence, e.g. "not measured: outside the window"; else empty.</summary>
    public string Remark { get; init; } = "";
}

/// <summary>A region of signal that no component accounts for.</summary>
/// <param name="FromPpm">Lower end.</param>
/// <param name="ToPpm">Upper end.</param>
/// <param name="Protons">Area in protons of the product.</param>
/// <param name="MolPercent">Area in mol % proton equivalents.</param>
/// <param name="Candidates">Known solvents and impurities with a signal there.</param>
public sealed record LeftOver(double FromPpm, double ToPpm, double Protons, double MolPercent, ImmutableArray<string> Candidates);

/// <summary>A quantity with its expanded uncertainty and budget.</summary>
/// <param name="Name">"assay", "purity", or the substance's name.</param>
/// <param name="Value">The value.</param>
/// <param name="ExpandedUncertainty">U = k u.</param>
/// <param name="CoverageFactor">k.</param>
/// <param name="Unit">"% (m/m)", "mol %", "ppm".</param>
/// <param name="Budget">Contributions, largest first.</param>
public sealed record Quantity(
    string Name, double Value, double ExpandedUncertainty, double CoverageFactor, string Unit, ImmutableArray<BudgetLine> Budget);

/// <summary>One contribution to a combined standard uncertainty.</summary>
/// <param name="Source">What it comes from.</param>
/// <param name="RelativeStandardUncertainty">Relative standard uncertainty contributed.</param>
public sealed record BudgetLine(string Source, double RelativeStandardUncertainty);

/// <summary>A rival structure put to the same test.</summary>
/// <param name="Name">Its name.</param>
/// <param name="Smiles">SMILES; canonical where the method owner named it.</param>
/// <param name="LogEvidenceRatio">log10 evidence of the expected structure over the rival.</param>
/// <param name="ToldApart">Whether that reaches the limit.</param>
public sealed record RivalResult(string Name, string Smiles, double LogEvidenceRatio, bool ToldApart)
{
    /// <summary>Whether the engine generated it, rather than the method owner naming it; its SMILES is its name then.</summary>
    public bool IsGenerated { get; init; }

    /// <summary>
    /// Whether the ratio comes from a full fit of the rival. Else it is the estimate of the screen, from places, counts and widths
    /// of the predicted signals alone, and counts as told apart only well beyond the limit.
    /// </summary>
    public bool IsFitted { get; init; } = true;
}

/// <summary>A substance found beside the product.</summary>
/// <param name="Name">Its name.</param>
/// <param name="Role">"solvent", "water", "reference", "internal standard", "impurity".</param>
/// <param name="RegionsPpm">Where its signals lie.</param>
/// <param name="Protons">Area in protons of the product.</param>
/// <param name="MolPercent">Amount relative to the product in mol %, where it has a meaning.</param>
public sealed record OtherSubstance(
    string Name, string Role, ImmutableArray<Interval> RegionsPpm, double Protons, double? MolPercent);

/// <summary>Curves for drawing, all on the spectrum's axis.</summary>
/// <param name="FirstPpm">Shift of point 0 (highest).</param>
/// <param name="PpmPerPoint">Step, negative.</param>
/// <param name="Measured">The spectrum as judged.</param>
/// <param name="Modelled">The fitted model.</param>
/// <param name="LeftOver">Measured minus modelled.</param>
public sealed record Traces(double FirstPpm, double PpmPerPoint, float[] Measured, float[] Modelled, float[] LeftOver);

/// <summary>One spectrum after reading and processing.</summary>
public sealed record SpectrumReport
{
    /// <summary>The submitter's name for it.</summary>
    public required string Name { get; init; }

    /// <summary>Why it could not be read, else null.</summary>
    public ReadingError? Error { get; init; }

    /// <summary>Departures from the format and defaults taken.</summary>
    public ImmutableArray<ReadingWarning> Warnings { get; init; } = [];

    /// <summary>Steps of processing.</summary>
    public ImmutableArray<ProcessingStep> Steps { get; init; } = [];

    /// <summary>Field as 1H frequency in MHz; null where unreadable.</summary>
    public double? FrequencyMHz { get; init; }

    /// <summary>Solvent that the spectrum shows, else null.</summary>
    public string? RecognisedSolvent { get; init; }

    /// <summary>Curves for drawing; null where unreadable.</summary>
    public Traces? Traces { get; init; }
}

/// <summary>The engine's answer on a lot.</summary>
public sealed record CheckReport
{
    /// <summary>Version of the engine that made it.</summary>
    public required string EngineVersion { get; init; }

    /// <summary>True where a spectrum could not be read: there is no verdict then.</summary>
    public bool Unreadable { get; init; }

    /// <summary>True where the measurement was not fit to be judged: re-measure.</summary>
    public bool Unsuitable { get; init; }

    /// <summary>Pass or flag; null where unreadable.</summary>
    public Outcome? Verdict { get; init; }

    /// <summary>One or two plain sentences that say why, most important first.</summary>
    public required string Summary { get; init; }

    /// <summary>All findings, flags first within each family.</summary>
    public ImmutableArray<Finding> Findings { get; init; } = [];

    /// <summary>The proton ledger.</summary>
    public ImmutableArray<LedgerLine> Protons { get; init; } = [];

    /// <summary>Signal that nothing accounts for.</summary>
    public ImmutableArray<LeftOver> LeftOver { get; init; } = [];

    /// <summary>Other substances accounted for.</summary>
    public ImmutableArray<OtherSubstance> Others { get; init; } = [];

    /// <summary>Quantities.</summary>
    public ImmutableArray<Quantity> Quantities { get; init; } = [];

    /// <summary>Rivals, closest first.</summary>
    public ImmutableArray<RivalResult> Rivals { get; init; } = [];

    /// <summary>The reference lot it was judged against; null where by prediction.</summary>
    public string? Reference { get; init; }

    /// <summary>Fitted shifts and couplings, by which the lot itself can become a reference.</summary>
    public FittedConstants? Constants { get; init; }

    /// <summary>Spectra, in order of submission.</summary>
    public ImmutableArray<SpectrumReport> Spectra { get; init; } = [];
}
