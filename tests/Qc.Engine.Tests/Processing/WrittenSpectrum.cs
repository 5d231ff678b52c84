using Qc.Engine.Reading;

namespace Qc.Engine.Tests.Processing;

/// <summary>A Lorentzian line of a given height, or, with a pattern, several of them a coupling apart.</summary>
/// <param name="Ppm">Centre.</param>
/// <param name="Height">Height of the tallest line of the pattern.</param>
/// <param name="Hertz">Distance of the lines of the pattern.</param>
/// <param name="Pattern">Relative heights; one line where there is none.</param>
internal sealed record WrittenSignal(double Ppm, double Height, double Hertz = 0, params double[] Pattern)
{
    public static WrittenSignal Quintet(double ppm, double height, double hertz) => new(ppm, height, hertz, 1, 2, 3, 2, 1);
}

/// <summary>Processed spectra written down from their formula: 500 MHz, 10.5 to −1 ppm, lines 1 Hz wide, noise of deviation 1.</summary>
internal static class WrittenSpectrum
{
    public const double FrequencyMHz = 500;
    private const int Count = 32768;
    private const double FirstPpm = 10.5;
    private const double StepPpm = -11.5 / (Count - 1);

    public static SpectrumMeasurement Of(
        IEnumerable<WrittenSignal> signals, string? solventLabel = null, double axisOffPpm = 0, double widthHertz = 1, double level = 0, int seed = 5)
    {
        var noise = new Gaussian(seed);
        var values = new double[Count];
        for (int i = 0; i < Count; i++)
        {
            values[i] = level + noise.Next();
        }

        foreach (WrittenSignal signal in signals)
        {
            double[] pattern = signal.Pattern.Length == 0 ? [1] : signal.Pattern;
            for (int k = 0; k < pattern.Length; k++)
            {
                double hertz = (signal.Ppm * FrequencyMHz) + ((k - (0.5 * (pattern.Length - 1))) * signal.Hertz);
                Add(values, hertz, signal.Height * pattern[k] / pattern.Max(), widthHertz);
            }
        }

        return new SpectrumMeasurement(
            new AcquisitionFacts { Nucleus = "1H", ObserveFrequencyMHz = FrequencyMHz, ZeroPpmFrequencyMHz = FrequencyMHz, SolventLabel = solventLabel },
            [],
            values,
            null,
            FirstPpm + axisOffPpm,
            StepPpm,
            true);
    }

    private static void Add(double[] values, double hertz, double height, double widthHertz)
    {
        for (int i = 0; i < Count; i++)
        {
            double u = (((FirstPpm + (i * StepPpm)) * FrequencyMHz) - hertz) / (0.5 * widthHertz);
            values[i] += height / (1 + (u * u));
        }
    }
}
