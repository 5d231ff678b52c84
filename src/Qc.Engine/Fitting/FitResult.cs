using System.Collections.Immutable;
using Qc.Engine.Values;

namespace Qc.Engine.Fitting;

/// <summary>What the fit found of one proton group.</summary>
public sealed record GroupFit
{
    /// <summary>Index of the group.</summary>
    public required int Group { get; init; }

    /// <summary>False where the group's expected place lies outside the measured window.</summary>
    public required bool Measured { get; init; }

    /// <summary>Whether signal was found for it.</summary>
    public required bool Found { get; init; }

    /// <summary>Shift found, in ppm on the spectrum's axis.</summary>
    public double ShiftPpm { get; init; }

    /// <summary>Standard uncertainty of the shift in ppm.</summary>
    public double ShiftStandardUncertaintyPpm { get; init; }

    /// <summary>Protons found, on the scale on which the product's groups agree best.</summary>
    public double Protons { get; init; }

    /// <summary>Standard uncertainty of the protons found.</summary>
    public double ProtonsStandardUncertainty { get; init; }

    /// <summary>Where its lines lie.</summary>
    public Interval RegionPpm { get; init; }

    /// <summary>Share of the signal in the region that the model does not draw, 0 to 1 (shape faults of the shim removed).</summary>
    public double PatternMisfit { get; init; }

    /// <summary>Whether no other group lies in the same region.</summary>
    public bool Alone { get; init; }
}

/// <summary>A fitted coupling constant.</summary>
/// <param name="Parameter">Number of the constant, as in the expectation.</param>
/// <param name="Hertz">Value with sign.</param>
/// <param name="StandardUncertaintyHertz">Standard uncertainty from the data and the prior.</param>
/// <param name="Determined">Whether the data, rather than the prior, determine it.</param>
public sealed record CouplingFit(int Parameter, double Hertz, double StandardUncertaintyHertz, bool Determined);

/// <summary>Another substance in the model.</summary>
/// <param name="Name">Its name.</param>
/// <param name="Role">"solvent", "water", "reference", "internal standard", "impurity".</param>
/// <param name="RegionsPpm">Where its signals lie.</param>
/// <param name="Area">Area in intensity × Hz.</param>
/// <param name="AreaStandardUncertainty">Its standard uncertainty.</param>
/// <param name="Protons">Protons of one molecule in the signals fitted; 0 where not meaningful.</param>
public sealed record OtherFit(
    string Name, string Role, ImmutableArray<Interval> RegionsPpm, double Area, double AreaStandardUncertainty, double Protons);

/// <summary>Signal that the model leaves over.</summary>
/// <param name="Ppm">Where.</param>
/// <param name="Area">Net area in intensity × Hz.</param>
/// <param name="MaximaPpm">Positions of its maxima.</param>
public sealed record LeftOverRegion(Interval Ppm, double Area, ImmutableArray<double> MaximaPpm);

/// <summary>The whole spectrum as one model.</summary>
public sealed record FitResult
{
    /// <summary>One per proton group of the product.</summary>
    public required ImmutableArray<GroupFit> Groups { get; init; }

    /// <summary>One per coupling constant of the product that took part.</summary>
    public required ImmutableArray<CouplingFit> Couplings { get; init; }

    /// <summary>Other substances.</summary>
    public required ImmutableArray<OtherFit> Others { get; init; }

    /// <summary>Regions left over, largest first.</summary>
    public required ImmutableArray<LeftOverRegion> LeftOver { get; init; }

    /// <summary>Area of one proton of the product in intensity × Hz; 0 where nothing of the product was found.</summary>
    public required double AreaPerProton { get; init; }

    /// <summary>Relative standard uncertainty of that area.</summary>
    public required double AreaPerProtonRelativeUncertainty { get; init; }

    /// <summary>Fitted width at half height of the sharp lines, in Hz.</summary>
    public required double WidthHertz { get; init; }

    /// <summary>Width at half height as measured on the lines that stand clear, in Hz; what a shim is judged by.</summary>
    public required double MeasuredWidthHertz { get; init; }

    /// <summary>The model at every point of the spectrum, its smooth baseline included.</summary>
    public required double[] Modelled { get; init; }

    /// <summary>The smooth baseline in it: feet, humps and rolls far wider than a multiplet.</summary>
    public required double[] Baseline { get; init; }

    /// <summary>Whether the last stage of the fit came to rest.</summary>
    public required bool Converged { get; init; }

    /// <summary>Share of the local signal that line-shape faults amount to, at which the evidence was taken.</summary>
    public required double MisfitShare { get; init; }

    /// <summary>Natural logarithm of the evidence up to a constant of the spectrum: comparable between structures fitted to the same spectrum.</summary>
    public required double LogEvidence { get; init; }
}
