using System.Collections.Immutable;
using Qc.Engine.Fitting;
using Qc.Engine.Prediction;
using Qc.Engine.Processing;
using Qc.Engine.Spins;
using Qc.Engine.Structures;

namespace Qc.Engine.Tests.Fitting;

/// <summary>A proton group of a made-up substance: what is true and what is expected of it.</summary>
internal sealed record MadeUpGroup(int Count, double TruePpm, double ExpectedPpm, double Uncertainty = 0.1, bool Exchangeable = false);

/// <summary>Expectations and spectra of which the truth is known because they are made here.</summary>
internal static class MadeUp
{
    /// <summary>An expectation with one set per group; couplings are (group, group, true Hz, expected Hz).</summary>
    public static Expectation Expectation(MadeUpGroup[] groups, (int A, int B, double TrueHz, double ExpectedHz)[] couplings) => new(
        new ProtonGroups(
            [.. groups.Select((g, i) => new ProtonGroup(i, $"H-{i + 1}", [i], g.Count, g.Exchangeable ? Lability.Exchangeable : Lability.Fixed))],
            [.. groups.Select((g, i) => new ProtonSet(i, i, [i], g.Count))]),
        [.. groups.Select((g, i) => new ExpectedShift(i, g.ExpectedPpm, g.Uncertainty, Basis.Increments, []))],
        [.. couplings.Select((c, i) => new ExpectedCoupling(c.A, c.B, c.ExpectedHz, 0.6, 3, i, "test"))],
        []);

    /// <summary>True lines in Hz from 0 ppm.</summary>
    public static Transition[] Lines(MadeUpGroup[] groups, (int A, int B, double TrueHz, double ExpectedHz)[] couplings, double frequencyMHz) =>
        SpinSimulation.Simulate(new SpinSystem(
            [.. groups.Select(g => new SpinSite(g.TruePpm * frequencyMHz, g.Count))],
            [.. couplings.Select(c => new SpinCoupling(c.A, c.B, c.TrueHz))]));

    /// <summary>A Lorentzian spectrum of the lines with white noise.</summary>
    /// <param name="lines">Lines, with the area of one proton for each unit of intensity.</param>
    /// <param name="frequencyMHz">Field.</param>
    /// <param name="signalToNoise">Height of the highest line over twice the noise.</param>
    /// <param name="seed">Seed of the noise.</param>
    /// <param name="widthHertz">Line width.</param>
    public static Spectrum Spectrum(
        IEnumerable<Transition> lines, double frequencyMHz, double signalToNoise, int seed, double widthHertz = 1, int points = 32768)
    {
        const double high = 10.5;
        const double low = -0.5;
        double step = (low - high) / (points - 1);
        var y = new double[points];
        foreach (Transition line in lines)
        {
            var shape = new LineShape(widthHertz, 0);
            for (int i = 0; i < points; i++)
            {
                double distance = ((high + (i * step)) * frequencyMHz) - line.FrequencyHertz;
                if (Math.Abs(distance) < 800 * widthHertz)
                {
                    y[i] += line.Intensity * shape.At(distance);
                }
            }
        }

        double noise = y.Max() / (2 * signalToNoise);
        var random = new Random(seed);
        for (int i = 0; i < points; i++)
        {
            y[i] += noise * Math.Sqrt(-2 * Math.Log(1 - random.NextDouble())) * Math.Cos(2 * Math.PI * random.NextDouble());
        }

        return new Spectrum
        {
            Nucleus = "1H",
            FrequencyMHz = frequencyMHz,
            Intensity = y,
            FirstPpm = high,
            PpmPerPoint = step,
            NoiseStandardDeviation = noise,
        };
    }
}
