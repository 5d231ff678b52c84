using System.Collections.Immutable;
using Qc.Engine.Spins;

namespace Qc.Engine.Tests.Spins;

/// <summary>Short ways to write spin systems, and random ones.</summary>
internal static class Systems
{
    /// <summary>Nothing dropped, nothing merged: for comparison to rounding.</summary>
    public static readonly SimulationOptions All = new() { DroppedLine = 0, DroppedInAll = 0, MergeHertz = 0 };

    public static SpinSystem Of((double Frequency, int Count)[] sites, params (int A, int B, double Hertz)[] couplings) =>
        new([.. sites.Select(s => new SpinSite(s.Frequency, s.Count))],
            [.. couplings.Select(c => new SpinCoupling(c.A, c.B, c.Hertz))]);

    public static SpinSystem Random(int seed, int[] counts, double spread, double couplingRange)
    {
        var random = new System.Random(seed);
        ImmutableArray<SpinSite> sites = [.. counts.Select(n => new SpinSite((random.NextDouble() - 0.5) * spread, n))];
        var couplings = ImmutableArray.CreateBuilder<SpinCoupling>();
        for (int a = 0; a < counts.Length; a++)
        {
            for (int b = a + 1; b < counts.Length; b++)
            {
                couplings.Add(new SpinCoupling(a, b, (random.NextDouble() - 0.3) * couplingRange));
            }
        }

        return new SpinSystem(sites, couplings.ToImmutable());
    }

    /// <summary>A chain of CH2 groups, every proton distinct: geminal −13 Hz, vicinal 3 to 12 Hz.</summary>
    public static SpinSystem Chain(int seed, int carbons, double span)
    {
        var random = new System.Random(seed);
        ImmutableArray<SpinSite> sites =
            [.. Enumerable.Range(0, 2 * carbons).Select(_ => new SpinSite(random.NextDouble() * span, 1))];
        var couplings = ImmutableArray.CreateBuilder<SpinCoupling>();
        for (int c = 0; c < carbons; c++)
        {
            couplings.Add(new SpinCoupling(2 * c, 2 * c + 1, -13));
            for (int pair = 0; pair < 4 && c + 1 < carbons; pair++)
            {
                couplings.Add(new SpinCoupling(2 * c + pair / 2, 2 * c + 2 + pair % 2, 3 + 9 * random.NextDouble()));
            }
        }

        return new SpinSystem(sites, couplings.ToImmutable());
    }

    /// <summary>Intensity of all lines within 1e-6 Hz of a frequency: degenerate lines may share it in any way.</summary>
    public static double IntensityAt(IEnumerable<(double Frequency, double Intensity)> lines, double frequency) =>
        lines.Where(l => Math.Abs(l.Frequency - frequency) < 1e-6).Sum(l => l.Intensity);

    public static List<(double Frequency, double Intensity)> Pairs(this IEnumerable<Transition> lines) =>
        [.. lines.Select(l => (l.FrequencyHertz, l.Intensity))];
}
