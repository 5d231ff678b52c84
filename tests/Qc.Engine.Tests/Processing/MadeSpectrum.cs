using Qc.Engine.Processing;
using Qc.Engine.Reading;

namespace Qc.Engine.Tests.Processing;

/// <summary>Spectra summed from Lorentzian lines of known place, with noise, on an axis that can be wrong by a known amount.</summary>
internal sealed class MadeSpectrum(double frequencyMHz = 400, double axisErrorPpm = 0)
{
    private const int Count = 32768;
    private const double HighPpm = 11;
    private const double LowPpm = -1;
    private const double Step = (LowPpm - HighPpm) / (Count - 1);

    private readonly double[] values = new double[Count];

    /// <summary>Adds one line by its true shift.</summary>
    public MadeSpectrum Line(double ppm, double height, double widthHertz = 1, double fromHertz = 0)
    {
        double centre = (ppm * frequencyMHz) + fromHertz;
        for (int i = 0; i < Count; i++)
        {
            double u = 2 * (((HighPpm + (i * Step)) * frequencyMHz) - centre) / widthHertz;
            values[i] += height / (1 + (u * u));
        }

        return this;
    }

    /// <summary>Adds a multiplet; heights from one side to the other, the highest of them scaled to <paramref name="height"/>.</summary>
    public MadeSpectrum Multiplet(double ppm, double height, double hertz, double[] pattern, double widthHertz = 1)
    {
        for (int k = 0; k < pattern.Length; k++)
        {
            Line(ppm, height * pattern[k] / pattern.Max(), widthHertz, (k - ((pattern.Length - 1) / 2.0)) * hertz);
        }

        return this;
    }

    /// <summary>A product of two aromatic doublets, an ethyl group and a methyl singlet, 100 high.</summary>
    public MadeSpectrum Product() => Multiplet(7.85, 60, 8.5, [1, 1]).Multiplet(6.85, 60, 8.5, [1, 1])
        .Multiplet(4.1, 40, 7, [1, 3, 3, 1]).Multiplet(1.3, 50, 7, [1, 2, 1]).Line(3.8, 100);

    /// <summary>The residual signal of DMSO-d6 (1:2:3:2:1, 1.9 Hz) and its water.</summary>
    public MadeSpectrum Dmso(double height = 20, double widthHertz = 1) =>
        Multiplet(2.50, height, 1.9, [1, 2, 3, 2, 1], widthHertz).Line(3.33, height, 3);

    /// <summary>Processes it with noise of standard deviation 0.05.</summary>
    public ProcessingOutcome Process(string? header, string? prescribed = null)
    {
        var noise = new Random(17);
        double[] measured = [.. values.Select(v => v + (0.05 * Enumerable.Range(0, 12).Sum(_ => noise.NextDouble() - 0.5)))];
        var facts = new AcquisitionFacts
        {
            Nucleus = "1H", ObserveFrequencyMHz = frequencyMHz, ZeroPpmFrequencyMHz = frequencyMHz, SolventLabel = header,
        };
        var measurement = new SpectrumMeasurement(facts, [], measured, null, HighPpm + axisErrorPpm, Step, AxisIsReferenced: true);
        return SpectrumProcessor.Process(measurement, new ProcessingOptions { PrescribedSolvent = prescribed });
    }
}
