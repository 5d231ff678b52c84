using Qc.Engine.Spins;
using Xunit;

namespace Qc.Engine.Tests.Spins;

public class ClusterTests
{
    [Theory]
    [InlineData(1, 300)]
    [InlineData(2, 800)]
    [InlineData(3, 2000)]
    public void A_split_chain_of_ten_spins_stays_within_its_stated_error(int seed, double span)
    {
        SpinSystem chain = Systems.Chain(seed, 5, span);
        // Next to nothing dropped, so that what is seen is the splitting alone.
        var exact = new SimulationOptions { DroppedLine = 1e-7 };
        SimulationOptions options = exact with { LargestExactBlock = 100 };
        CompiledSpinSystem split = CompiledSpinSystem.Compile(chain, options);
        double displaced = Displacement(SpinSimulation.Simulate(chain, exact), SpinSimulation.Simulate(chain, options));

        Assert.True(split.SplitErrorHertz > 0);
        Assert.InRange(displaced, 1e-6, Math.Min(split.SplitErrorHertz, 0.2));
    }

    [Fact]
    public void Thirty_coupled_protons_keep_their_intensity_site_by_site()
    {
        SpinSystem chain = Systems.Chain(4, 15, 3000);
        CompiledSpinSystem compiled = CompiledSpinSystem.Compile(chain);
        Transition[] lines = SpinSimulation.Simulate(chain);

        Assert.True(compiled.SplitErrorHertz > 0);
        Assert.Equal(30, lines.Sum(l => l.Intensity), 1e-9);
        double first = lines.Sum(l => l.Intensity * l.FrequencyHertz) / 30;
        Assert.Equal(chain.Sites.Average(s => s.FrequencyHertz), first, 0.05);
        for (int site = 0; site < 30; site++)
        {
            // The sum over lines that are mostly one site's own differs from 1 only by what strong coupling mixes.
            Assert.Equal(1, lines.Where(l => l.Site == site).Sum(l => l.Intensity), 0.2);
        }
    }

    [Fact]
    public void What_is_not_split_states_no_error() =>
        Assert.Equal(0, CompiledSpinSystem.Compile(Systems.Chain(1, 5, 800)).SplitErrorHertz);

    [Fact]
    public void Uncoupled_clusters_add_up()
    {
        SpinSystem ethyl = Systems.Of([(400, 3), (1200, 2)], (0, 1, 7.1));
        SpinSystem ab = Systems.Of([(2700, 1), (2720, 1)], (0, 1, 8.4));
        var both = new SpinSystem(
            ethyl.Sites.AddRange(ab.Sites), [.. ethyl.Couplings, new SpinCoupling(2, 3, 8.4), new SpinCoupling(1, 2, 0)]);
        IEnumerable<Transition> expected = SpinSimulation.Simulate(ethyl)
            .Concat(SpinSimulation.Simulate(ab).Select(l => l with { Site = l.Site + 2 })).OrderBy(l => l.FrequencyHertz);
        Assert.Equal(expected, SpinSimulation.Simulate(both));
    }

    [Fact]
    public void A_repeated_cluster_gives_its_lines_again_under_its_own_sites()
    {
        SpinSystem twins = Systems.Of([(400, 3), (1200, 2), (400, 3), (1200, 2), (400, 3), (1200, 2)],
            (0, 1, 7.1), (2, 3, 7.1), (4, 5, 9));
        Transition[] lines = SpinSimulation.Simulate(twins);
        List<(double, double)> Of(int a) => lines.Where(l => l.Site == a || l.Site == a + 1).Pairs();

        Assert.Equal(Of(0), Of(2));
        Assert.NotEqual(Of(0), Of(4));
        Assert.Equal(15, lines.Sum(l => l.Intensity), 1e-9);
    }

    [Fact]
    public void A_coupling_that_is_zero_when_compiled_can_be_switched_on_later()
    {
        SpinSystem off = Systems.Of([(0, 1), (20, 1)], (0, 1, 0));
        Transition[] on = CompiledSpinSystem.Compile(off).Evaluate([0, 20], [15]);
        Assert.Equal(SpinSimulation.Simulate(Systems.Of([(0, 1), (20, 1)], (0, 1, 15))), on);
    }

    [Theory]
    [InlineData(0, 0.0, 1, 5.0)]
    [InlineData(1, double.PositiveInfinity, 1, 5.0)]
    [InlineData(1, 0.0, 2, 5.0)]
    [InlineData(1, 0.0, -1, 5.0)]
    [InlineData(1, 0.0, 1, double.NaN)]
    public void A_system_that_makes_no_sense_is_refused(int count, double frequency, int partner, double hertz) =>
        Assert.Throws<ArgumentException>(() =>
            CompiledSpinSystem.Compile(Systems.Of([(frequency, count), (1, 1)], (0, partner, hertz))));

    /// <summary>Mean distance, in Hz, by which the intensity of one spectrum must move to become the other.</summary>
    private static double Displacement(Transition[] a, Transition[] b)
    {
        (double Frequency, double Change)[] steps =
        [
            .. a.Select(l => (l.FrequencyHertz, l.Intensity)).Concat(b.Select(l => (l.FrequencyHertz, -l.Intensity)))
                .OrderBy(s => s.FrequencyHertz),
        ];
        double difference = 0;
        double moved = 0;
        for (int i = 0; i + 1 < steps.Length; i++)
        {
            difference += steps[i].Change;
            moved += Math.Abs(difference) * (steps[i + 1].Frequency - steps[i].Frequency);
        }

        return moved / a.Sum(l => l.Intensity);
    }
}
