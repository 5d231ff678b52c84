using Qc.Engine.Spins;
using Xunit;

namespace Qc.Engine.Tests.Spins;

public class OtherNucleiTests
{
    [Fact]
    public void Fluorine_splits_protons_as_a_far_away_spin_does_but_shows_no_lines()
    {
        SpinCoupling[] couplings = [new(0, 1, 9), new(0, 2, 11), new(1, 2, -4.5)];
        var hidden = new SpinSystem([new(30, 2), new(0, 1), new(0, 2, false)], [.. couplings]);
        var far = new SpinSystem([new(30, 2), new(0, 1), new(1e8, 2)], [.. couplings]);

        Transition[] actual = SpinSimulation.Simulate(hidden, Systems.All);
        Transition[] expected = [.. SpinSimulation.Simulate(far, Systems.All).Where(l => l.FrequencyHertz < 1e6)];

        Assert.Equal(3, actual.Sum(l => l.Intensity), 1e-9);
        Assert.DoesNotContain(actual, l => l.Site == 2);
        foreach (Transition line in expected.Concat(actual).Where(l => l.Intensity > 1e-4))
        {
            double Near(Transition[] lines) =>
                lines.Where(l => Math.Abs(l.FrequencyHertz - line.FrequencyHertz) < 1e-4).Sum(l => l.Intensity);
            Assert.Equal(Near(expected), Near(actual), 1e-5);
        }
    }

    [Fact]
    public void More_other_nuclei_than_can_be_run_through_still_split_to_first_order()
    {
        // CH with seven inequivalent fluorines: 128 lines, more than the runs allowed, all exact as the proton is alone.
        double[] j = [48, 22.3, 11.1, 5.7, 2.9, 1.3, 0.7];
        var system = new SpinSystem(
            [new(100, 1), .. j.Select(_ => new SpinSite(0, 1, false))],
            [.. j.Select((hertz, i) => new SpinCoupling(0, i + 1, hertz))]);
        Transition[] lines = SpinSimulation.Simulate(system, Systems.All);
        for (int code = 0; code < 128; code++)
        {
            double expected = 100 + j.Select((hertz, i) => (code >> i & 1) == 0 ? 0.5 * hertz : -0.5 * hertz).Sum();
            Assert.Contains(lines, l => Math.Abs(l.FrequencyHertz - expected) < 0.01);
        }

        Assert.Equal(1, lines.Sum(l => l.Intensity), 1e-9);
    }
}
