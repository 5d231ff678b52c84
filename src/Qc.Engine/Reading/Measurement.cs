using System.Collections.Immutable;

namespace Qc.Engine.Reading;

/// <summary>The open formats a spectrum may come in.</summary>
public enum SpectrumFormat
{
    /// <summary>JCAMP-DX 4.24, 5.00, 5.01 or 6.00.</summary>
    JcampDx,

    /// <summary>nmrML (XML).</summary>
    NmrMl,

    /// <summary>Lines of "ppm,intensity".</summary>
    Csv,
}

/// <summary>Why a file could not be read, and where.</summary>
/// <param name="Label">The label or element at fault, e.g. "XYDATA"; empty where there is none.</param>
/// <param name="Line">Line of the file, counted from 1; 0 where the file as a whole is at fault.</param>
/// <param name="Expected">What was expected there.</param>
/// <param name="Message">One plain sentence: what, where, and what to do.</param>
public sealed record ReadingError(string Label, int Line, string Expected, string Message);

/// <summary>A departure from the format, or a default taken, that the lot carries with it.</summary>
/// <param name="Label">The label concerned.</param>
/// <param name="Line">Line of the file, counted from 1; 0 where it concerns the file as a whole.</param>
/// <param name="Message">One plain sentence.</param>
public sealed record ReadingWarning(string Label, int Line, string Message);

/// <summary>What the header says of the acquisition. Null where the header is silent; nothing is guessed here.</summary>
public sealed record AcquisitionFacts
{
    /// <summary>Title of the data block.</summary>
    public string Title { get; init; } = "";

    /// <summary>Observed nucleus as mass number and symbol: "1H", "13C".</summary>
    public required string Nucleus { get; init; }

    /// <summary>Transmitter frequency in MHz.</summary>
    public required double ObserveFrequencyMHz { get; init; }

    /// <summary>Frequency of 0 ppm in MHz where the header gives one.</summary>
    public double? ZeroPpmFrequencyMHz { get; init; }

    /// <summary>Solvent as written in the header.</summary>
    public string? SolventLabel { get; init; }

    /// <summary>Time over which the signal was sampled, in seconds.</summary>
    public double? AcquisitionTimeSeconds { get; init; }

    /// <summary>Relaxation delay before each scan, in seconds.</summary>
    public double? RelaxationDelaySeconds { get; init; }

    /// <summary>Number of scans.</summary>
    public int? Scans { get; init; }

    /// <summary>Pulse angle in degrees.</summary>
    public double? PulseAngleDegrees { get; init; }

    /// <summary>Sample temperature in kelvin.</summary>
    public double? TemperatureKelvin { get; init; }

    /// <summary>All labels as read (normalised label to text), private ones included.</summary>
    public ImmutableSortedDictionary<string, string> Labels { get; init; } = ImmutableSortedDictionary<string, string>.Empty;
}

/// <summary>One measurement as read: an FID or a spectrum. Arrays are never changed after reading.</summary>
/// <param name="Facts">What the header says.</param>
/// <param name="Warnings">Departures and defaults, in file order.</param>
public abstract record Measurement(AcquisitionFacts Facts, ImmutableArray<ReadingWarning> Warnings);

/// <summary>A free induction decay: complex points, equally spaced in time.</summary>
/// <param name="Facts">What the header says.</param>
/// <param name="Warnings">Departures and defaults.</param>
/// <param name="Real">Real part, one value per complex point.</param>
/// <param name="Imaginary">Imaginary part, same length; for the sign of frequencies see <see cref="MeasurementReader"/>.</param>
/// <param name="DwellSeconds">Time between complex points, in seconds; the spectral width is its inverse.</param>
/// <param name="CentrePpm">Shift at the transmitter frequency where the header tells it, else null.</param>
/// <param name="GroupDelayPoints">Delay of the digital filter in complex points where the header tells it (0: none), else null.</param>
public sealed record FidMeasurement(
    AcquisitionFacts Facts,
    ImmutableArray<ReadingWarning> Warnings,
    double[] Real,
    double[] Imaginary,
    double DwellSeconds,
    double? CentrePpm,
    double? GroupDelayPoints) : Measurement(Facts, Warnings);

/// <summary>A processed spectrum on an equidistant axis that runs from high to low ppm.</summary>
/// <param name="Facts">What the header says.</param>
/// <param name="Warnings">Departures and defaults.</param>
/// <param name="Real">Real part; index 0 is the highest ppm.</param>
/// <param name="Imaginary">Imaginary part where stored, same length, sign as written (see <see cref="MeasurementReader"/>), else null.</param>
/// <param name="FirstPpm">Shift of point 0.</param>
/// <param name="PpmPerPoint">Step along the axis, always negative.</param>
/// <param name="AxisIsReferenced">False where the file gave no reference and 0 ppm is only nominal.</param>
public sealed record SpectrumMeasurement(
    AcquisitionFacts Facts,
    ImmutableArray<ReadingWarning> Warnings,
    double[] Real,
    double[]? Imaginary,
    double FirstPpm,
    double PpmPerPoint,
    bool AxisIsReferenced) : Measurement(Facts, Warnings);

/// <summary>Outcome of reading a file: measurements, or the error that stopped it. Never an exception.</summary>
public sealed record ReadingResult
{
    private ReadingResult(ImmutableArray<Measurement> measurements, ReadingError? error)
    {
        Measurements = measurements;
        Error = error;
    }

    /// <summary>What the file holds, in file order; empty where <see cref="Error"/> is set.</summary>
    public ImmutableArray<Measurement> Measurements { get; }

    /// <summary>Why the file could not be read, else null.</summary>
    public ReadingError? Error { get; }

    /// <summary>A file that was read.</summary>
    public static ReadingResult Read(ImmutableArray<Measurement> measurements) => new(measurements, null);

    /// <summary>A file that was not.</summary>
    public static ReadingResult Rejected(ReadingError error) => new([], error);
}
