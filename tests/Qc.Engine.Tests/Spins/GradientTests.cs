using System.Collections.Immutable;
using Qc.Engine.Spins;
using Xunit;

namespace Qc.Engine.Tests.Spins;

public class GradientTests
{
    private const double Step = 1e-4;

    private static readonly SpinSystem Strong = Systems.Random(31, [3, 2, 1, 1], 50, 20);

    private static readonly SpinSystem WithFluorine = new(
        [new(30, 2), new(0, 1), new(0, 2, false), new(55, 1), new(0, 1, false)],
        [new(0, 1, 9), new(0, 2, 11), new(1, 2, -4.5), new(1, 3, 6), new(3, 4, 48), new(0, 0, -12)]);

    public static TheoryData<string> Names => ["strong", "fluorine", "split"];

    private static (SpinSystem System, SimulationOptions Options) Of(string name) => name switch
    {
        "strong" => (Strong, Systems.All),
        "fluorine" => (WithFluorine, Systems.All),
        _ => (Systems.Random(32, [1, 1, 1, 1, 1], 1500, 15),
            Systems.All with { LargestExactBlock = 4, LargestNeighbourhoodBlock = 6 }),
    };

    [Theory]
    [MemberData(nameof(Names))]
    public void Derivatives_are_those_of_a_small_step(string name)
    {
        (SpinSystem system, SimulationOptions options) = Of(name);
        CompiledSpinSystem compiled = CompiledSpinSystem.Compile(system, options);
        double[] frequencies = [.. system.Sites.Select(s => s.FrequencyHertz)];
        double[] couplings = [.. system.Couplings.Select(c => c.Hertz)];
        LineGradients at = compiled.EvaluateWithGradient(frequencies, couplings);

        // Splitting shifts finished lines by g·J·m with g frozen, and merges within 0.01 Hz; g itself varies as J²/Δν².
        double tolerance = name == "split" ? 5e-2 : 1e-3;
        for (int site = 0; site < frequencies.Length; site++)
        {
            Check(at, compiled.Evaluate(Changed(frequencies, site), couplings), line => at.SitesOf(line)[site], tolerance);
        }

        for (int c = 0; c < couplings.Length; c++)
        {
            Check(at, compiled.Evaluate(frequencies, Changed(couplings, c)), line => at.CouplingsOf(line)[c], tolerance);
        }
    }

    [Theory]
    [MemberData(nameof(Names))]
    public void All_sites_moved_together_move_every_line_as_much(string name)
    {
        (SpinSystem system, SimulationOptions options) = Of(name);
        LineGradients at = SpinSimulation.SimulateWithGradient(system, options);
        for (int line = 0; line < at.Lines.Length; line++)
        {
            Assert.Equal(1, at.SitesOf(line).ToArray().Sum(), 1e-9);
        }
    }

    [Fact]
    public void A_merged_line_has_the_mean_derivative_of_its_parts()
    {
        SpinSystem system = Systems.Of([(0, 1), (1e7, 2)], (0, 1, 7));
        LineGradients merged = SpinSimulation.SimulateWithGradient(system, new SimulationOptions { MergeHertz = 20 });
        int line = Array.FindIndex(merged.Lines, l => l.Site == 0);
        Assert.Equal(1, merged.Lines[line].Intensity, 1e-6);
        Assert.Equal(0, merged.CouplingsOf(line)[0], 1e-5);
        Assert.Equal(1, merged.SitesOf(line)[0], 1e-5);
    }

    [Fact]
    public void With_and_without_derivatives_the_lines_are_the_same()
    {
        CompiledSpinSystem compiled = CompiledSpinSystem.Compile(Strong);
        double[] frequencies = [.. Strong.Sites.Select(s => s.FrequencyHertz)];
        double[] couplings = [.. Strong.Couplings.Select(c => c.Hertz)];
        Assert.Equal(
            compiled.Evaluate(frequencies, couplings), compiled.EvaluateWithGradient(frequencies, couplings).Lines);
    }

    private static double[] Changed(double[] values, int index)
    {
        double[] changed = [.. values];
        changed[index] += Step;
        return changed;
    }

    private static void Check(LineGradients at, Transition[] moved, Func<int, double> derivative, double tolerance)
    {
        ImmutableArray<Transition> candidates = [.. moved];
        int compared = 0;
        for (int line = 0; line < at.Lines.Length; line++)
        {
            Transition here = at.Lines[line];
            if (here.Intensity < 1e-3)
            {
                continue;
            }

            double expected = here.FrequencyHertz + derivative(line) * Step;
            Transition there = candidates.MinBy(l => Math.Abs(l.FrequencyHertz - expected));
            Assert.Equal(derivative(line), (there.FrequencyHertz - here.FrequencyHertz) / Step, tolerance);
            compared++;
        }

        Assert.True(compared > 10);
    }
}
