using Qc.Engine.Spins;
using Xunit;

namespace Qc.Engine.Tests.Spins;

public class InvarianceTests
{
    private static readonly SpinSystem System = Systems.Random(21, [3, 2, 1, 1], 60, 20);

    private static void AssertSame(IEnumerable<Transition> expected, IEnumerable<Transition> actual)
    {
        List<(double Frequency, double Intensity)> a = expected.Pairs();
        List<(double Frequency, double Intensity)> b = actual.Pairs();
        foreach ((double frequency, _) in a.Concat(b).Where(l => l.Intensity > 1e-7))
        {
            Assert.Equal(Systems.IntensityAt(a, frequency), Systems.IntensityAt(b, frequency), 1e-7);
        }
    }

    [Fact]
    public void A_constant_added_to_all_frequencies_moves_the_pattern_rigidly()
    {
        SpinSystem moved = System with
        {
            Sites = [.. System.Sites.Select(s => s with { FrequencyHertz = s.FrequencyHertz + 500 })],
        };
        AssertSame(
            SpinSimulation.Simulate(System, Systems.All).Select(l => l with { FrequencyHertz = l.FrequencyHertz + 500 }),
            SpinSimulation.Simulate(moved, Systems.All));
    }

    [Fact]
    public void All_signs_flipped_give_the_mirror_image()
    {
        var mirrored = new SpinSystem(
            [.. System.Sites.Select(s => s with { FrequencyHertz = -s.FrequencyHertz })],
            [.. System.Couplings.Select(c => c with { Hertz = -c.Hertz })]);
        AssertSame(
            SpinSimulation.Simulate(System, Systems.All).Select(l => l with { FrequencyHertz = -l.FrequencyHertz }),
            SpinSimulation.Simulate(mirrored, Systems.All));
    }

    [Fact]
    public void Equivalent_spins_are_the_same_as_separate_ones_whatever_their_own_coupling()
    {
        SpinSystem together = Systems.Of([(12, 3), (-9, 2)], (0, 1, 7.3));
        (int, int, double)[] between = [(0, 3, 7.3), (0, 4, 7.3), (1, 3, 7.3), (1, 4, 7.3), (2, 3, 7.3), (2, 4, 7.3)];
        SpinSystem apart = Systems.Of(
            [(12, 1), (12, 1), (12, 1), (-9, 1), (-9, 1)], [.. between, (0, 1, -12.4), (1, 2, -12.4), (0, 2, -12.4), (3, 4, 5)]);
        AssertSame(SpinSimulation.Simulate(together, Systems.All), SpinSimulation.Simulate(apart, Systems.All));
    }

    [Fact]
    public void A_coupling_of_a_site_with_itself_does_not_show()
    {
        AssertSame(
            SpinSimulation.Simulate(System, Systems.All),
            SpinSimulation.Simulate(System with { Couplings = System.Couplings.Add(new SpinCoupling(0, 0, -12)) }, Systems.All));
    }

    [Fact]
    public void The_AB_part_of_ABX_does_not_show_the_sign_of_J_AB_but_that_of_J_AX()
    {
        Transition[] Simulate(double ab, double ax) => [.. SpinSimulation.Simulate(
            Systems.Of([(10, 1), (0, 1), (1e7, 1)], (0, 1, ab), (0, 2, ax), (1, 2, 3)), Systems.All)
            .Where(l => l.FrequencyHertz < 1e6).Select(l => l with { FrequencyHertz = Math.Round(l.FrequencyHertz, 3) })];
        AssertSame(Simulate(12, 7), Simulate(-12, 7));
        Assert.Throws<Xunit.Sdk.EqualException>(() => AssertSame(Simulate(12, 7), Simulate(12, -7)));
    }
}
