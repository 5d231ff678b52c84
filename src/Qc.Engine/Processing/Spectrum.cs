using System.Collections.Immutable;
using Qc.Engine.Values;

namespace Qc.Engine.Processing;

/// <summary>One step of processing with its parameters, enough to replay it.</summary>
/// <param name="Name">What was done, e.g. "phase".</param>
/// <param name="Parameters">Parameter name (with unit) to value.</param>
/// <param name="Note">One plain sentence for people.</param>
public sealed record ProcessingStep(string Name, ImmutableSortedDictionary<string, double> Parameters, string Note);

/// <summary>A spectrum ready to be judged: phased, baseline-corrected, referenced, with its noise. Never changed.</summary>
public sealed record Spectrum
{
    /// <summary>Observed nucleus: "1H", "13C".</summary>
    public required string Nucleus { get; init; }

    /// <summary>Frequency of 0 ppm in MHz; Hz = ppm times this.</summary>
    public required double FrequencyMHz { get; init; }

    /// <summary>Intensities; index 0 is the highest ppm.</summary>
    public required double[] Intensity { get; init; }

    /// <summary>Shift of point 0.</summary>
    public required double FirstPpm { get; init; }

    /// <summary>Step along the axis, always negative.</summary>
    public required double PpmPerPoint { get; init; }

    /// <summary>Standard deviation of the noise, in units of <see cref="Intensity"/>.</summary>
    public required double NoiseStandardDeviation { get; init; }

    /// <summary>Points over which noise is correlated (1 for white noise; 2 after zero filling once).</summary>
    public double NoiseCorrelationPoints { get; init; } = 1;

    /// <summary>Solvent that the spectrum itself shows (name as in Data/Solvents), else null.</summary>
    public string? RecognisedSolvent { get; init; }

    /// <summary>What was added to the file's axis to reference it, in ppm; null where no reference was found.</summary>
    public double? AxisCorrectionPpm { get; init; }

    /// <summary>What the axis rests on: "TMS", "DSS", "residual solvent", "file".</summary>
    public string ReferencedBy { get; init; } = "file";

    /// <summary>Steps taken from the file to here, in order.</summary>
    public ImmutableArray<ProcessingStep> Steps { get; init; } = [];

    /// <summary>Number of points.</summary>
    public int Count => Intensity.Length;

    /// <summary>Shift of point <paramref name="index"/>.</summary>
    public double Ppm(double index) => FirstPpm + (index * PpmPerPoint);

    /// <summary>Index, with fraction, of a shift.</summary>
    public double IndexOf(double ppm) => (ppm - FirstPpm) / PpmPerPoint;

    /// <summary>Hz between neighbouring points, positive.</summary>
    public double HzPerPoint => -PpmPerPoint * FrequencyMHz;

    /// <summary>The window measured, in ppm.</summary>
    public Interval WindowPpm => new(Ppm(Count - 1), FirstPpm);
}
