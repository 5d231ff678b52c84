using System.Collections.Immutable;
using Qc.Engine.Fitting;
using Qc.Engine.Spins;

namespace Qc.Service.Demo;

/// <summary>How a demo spectrum is measured. Seeds make it the same every time.</summary>
/// <param name="FrequencyMHz">Field.</param>
/// <param name="Solvent">Solvent, as in demo-substances.tsv.</param>
/// <param name="LineWidthHertz">Width at half height.</param>
/// <param name="SignalToNoise">Height of the product's highest line over twice the noise.</param>
/// <param name="Seed">Seed of the noise.</param>
internal sealed record DemoMeasurement(double FrequencyMHz, string Solvent, double LineWidthHertz, double SignalToNoise, int Seed)
{
    /// <summary>Highest shift measured.</summary>
    public double FirstPpm { get; init; } = 12;

    /// <summary>Lowest shift measured.</summary>
    public double LastPpm { get; init; } = -1;

    /// <summary>Number of points.</summary>
    public int Points { get; init; } = 32768;
}

/// <summary>Makes spectra for the demo plant from spin systems: the same quantum-mechanical lines, Lorentzian, with noise.</summary>
internal static class DemoSpectrum
{
    /// <summary>Intensities from high to low ppm.</summary>
    /// <param name="measurement">How it is measured.</param>
    /// <param name="contents">Substances with their molar amounts relative to the product.</param>
    public static double[] Make(DemoMeasurement measurement, params ReadOnlySpan<(string Substance, double Amount)> contents)
    {
        var intensity = new double[measurement.Points];
        double highest = 0;
        foreach ((string substance, double amount) in contents)
        {
            foreach (ImmutableArray<DemoSite> part in Parts(DemoSubstances.Sites(substance, measurement.Solvent)))
            {
                Draw(measurement, part, amount, intensity);
            }

            // The first substance is the product; noise is measured against it, not against solvent or reference.
            highest = highest == 0 ? intensity.Max() : highest;
        }

        double noise = highest / (2 * measurement.SignalToNoise);
        var random = new Random(measurement.Seed);
        for (int i = 0; i < intensity.Length; i++)
        {
            intensity[i] += noise * Math.Sqrt(-2 * Math.Log(1 - random.NextDouble())) * Math.Cos(2 * Math.PI * random.NextDouble());
        }

        return intensity;
    }

    /// <summary>Step of the axis, negative.</summary>
    public static double PpmPerPoint(DemoMeasurement measurement) =>
        (measurement.LastPpm - measurement.FirstPpm) / (measurement.Points - 1);

    /// <summary>Sites of different width are drawn apart; they do not couple in the demo.</summary>
    private static IEnumerable<ImmutableArray<DemoSite>> Parts(ImmutableArray<DemoSite> sites) =>
        sites.GroupBy(s => s.ExtraWidthHertz).Select(g => g.ToImmutableArray());

    private static void Draw(DemoMeasurement measurement, ImmutableArray<DemoSite> sites, double amount, double[] intensity)
    {
        double step = PpmPerPoint(measurement);
        double hertzPerPoint = -step * measurement.FrequencyMHz;
        Transition[] lines = SpinSimulation.Simulate(new SpinSystem(
            [.. sites.Select(s => new SpinSite(s.Ppm * measurement.FrequencyMHz, s.Protons))],
            [.. Couplings(sites)]));
        var shape = new LineShape(measurement.LineWidthHertz + sites[0].ExtraWidthHertz, 0);
        foreach (Transition line in lines)
        {
            double centre = ((line.FrequencyHertz / measurement.FrequencyMHz) - measurement.FirstPpm) / step;
            for (int i = 0; i < intensity.Length; i++)
            {
                intensity[i] += amount * line.Intensity * shape.At((i - centre) * hertzPerPoint);
            }
        }
    }

    private static IEnumerable<SpinCoupling> Couplings(ImmutableArray<DemoSite> sites)
    {
        for (int a = 0; a < sites.Length; a++)
        {
            foreach ((string partner, double hertz) in sites[a].Couplings)
            {
                int b = sites.Select(s => s.Name).ToList().IndexOf(partner);
                if (b >= 0)
                {
                    yield return new SpinCoupling(a, b, hertz);
                }
            }
        }
    }
}
