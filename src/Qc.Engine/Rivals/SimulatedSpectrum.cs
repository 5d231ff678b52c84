using Qc.Engine.Fitting;
using Qc.Engine.Prediction;
using Qc.Engine.Processing;
using Qc.Engine.Spins;
using Qc.Engine.Structures;

namespace Qc.Engine.Rivals;

/// <summary>How a spectrum is simulated.</summary>
public sealed record SimulationConditions
{
    /// <summary>Field as 1H frequency in MHz.</summary>
    public double FrequencyMHz { get; init; } = 400;

    /// <summary>Line width at half height in Hz.</summary>
    public double WidthHertz { get; init; } = 1;

    /// <summary>Height of the highest line over twice the noise's standard deviation.</summary>
    public double SignalToNoise { get; init; } = 500;

    /// <summary>Seed of the noise: the same seed gives the same noise.</summary>
    public int Seed { get; init; } = 1;
}

/// <summary>The spectrum that a predicted substance, or a mixture, would give: exact lines, Lorentzian, white noise.</summary>
internal static class SimulatedSpectrum
{
    private const double HighPpm = 13;
    private const double LowPpm = -0.5;
    private const double ReachInWidths = 400;

    /// <summary>The spectrum of substances by molar amount; exchangeable protons are left out, as their place and width are open.</summary>
    public static Spectrum Of(SimulationConditions conditions, params ReadOnlySpan<(Expectation Substance, double Amount)> contents)
    {
        // Four points a line width, so that the digital resolution is never what limits.
        int points = (int)Math.Ceiling((HighPpm - LowPpm) * conditions.FrequencyMHz * 4 / conditions.WidthHertz);
        double step = (LowPpm - HighPpm) / (points - 1);
        var intensity = new double[points];
        var shape = new LineShape(conditions.WidthHertz, 0);
        double hertzPerPoint = -step * conditions.FrequencyMHz;
        int reach = (int)(ReachInWidths * conditions.WidthHertz / hertzPerPoint);
        foreach ((Expectation substance, double amount) in contents)
        {
            foreach (Transition line in SpinSimulation.Simulate(SystemOf(substance, conditions.FrequencyMHz)))
            {
                double centre = ((line.FrequencyHertz / conditions.FrequencyMHz) - HighPpm) / step;
                for (int i = Math.Max(0, (int)centre - reach); i <= Math.Min(points - 1, (int)centre + reach); i++)
                {
                    intensity[i] += amount * line.Intensity * shape.At((i - centre) * hertzPerPoint);
                }
            }
        }

        double noise = intensity.Max() / (2 * conditions.SignalToNoise);
        var random = new Random(conditions.Seed);
        for (int i = 0; i < points; i++)
        {
            intensity[i] += noise * Math.Sqrt(-2 * Math.Log(1 - random.NextDouble())) * Math.Cos(2 * Math.PI * random.NextDouble());
        }

        return new Spectrum
        {
            Nucleus = "1H",
            FrequencyMHz = conditions.FrequencyMHz,
            Intensity = intensity,
            FirstPpm = HighPpm,
            PpmPerPoint = step,
            NoiseStandardDeviation = noise,
        };
    }

    private static SpinSystem SystemOf(Expectation substance, double frequencyMHz)
    {
        int[] kept = [.. substance.Protons.Sets.Where(set => substance.Protons.Groups[set.Group].Lability == Lability.Fixed).Select(set => set.Index)];
        var siteOf = kept.Select((set, site) => (set, site)).ToDictionary(pair => pair.set, pair => pair.site);
        return new SpinSystem(
            [
                .. kept.Select(set => new SpinSite(
                    substance.Shifts[substance.Protons.Sets[set].Group].ShiftPpm * frequencyMHz, substance.Protons.Sets[set].Count)),
            ],
            [
                .. substance.Couplings.Where(c => siteOf.ContainsKey(c.SetA) && siteOf.ContainsKey(c.SetB))
                    .Select(c => new SpinCoupling(siteOf[c.SetA], siteOf[c.SetB], c.Hertz)),
            ]);
    }
}
