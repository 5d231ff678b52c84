using Qc.Engine.Spins;
using Xunit;

namespace Qc.Engine.Tests.Spins;

/// <summary>
/// Moments of the whole spectrum, from traces of commutators of H with the total I⁻: the first three do not depend on any
/// coupling; the fourth is (1/N)[Σ ν⁴ + ½ Σ J² (ν_i − ν_j)²].
/// </summary>
public class SumRuleTests
{
    private static double Moment(Transition[] lines, int order) =>
        lines.Sum(l => l.Intensity * Math.Pow(l.FrequencyHertz, order)) / lines.Sum(l => l.Intensity);

    [Fact]
    public void Five_spins_have_the_moments_of_the_worked_example()
    {
        // Worked example, computed once with a full matrix and again from the formulas.
        SpinSystem system = Systems.Of(
            [(1.18, 1), (45.05, 1), (-35.58, 1), (44.86, 1), (-18.82, 1)],
            (0, 1, 3.47), (0, 2, 11.55), (0, 3, 3.18), (0, 4, 5.99), (1, 2, -4.45), (1, 3, 10.07), (1, 4, 5.76), (2, 3, 1.59),
            (2, 4, 10.77), (3, 4, 1.06));
        Transition[] lines = SpinSimulation.Simulate(system, Systems.All);

        Assert.Equal(5, lines.Sum(l => l.Intensity), 1e-9);
        Assert.Equal(7.338, Moment(lines, 1), 1e-9);
        Assert.Equal(1132.68866, Moment(lines, 2), 1e-5);
        Assert.Equal(25999.991, Moment(lines, 3), 1e-3);
        Assert.Equal(2034819.479, Moment(lines, 4), 1e-3);
    }

    [Theory]
    [InlineData(1, new[] { 3, 2, 2 })]
    [InlineData(2, new[] { 1, 1, 1, 1, 1, 1, 1, 1 })]
    [InlineData(3, new[] { 6, 1, 2 })]
    [InlineData(4, new[] { 9, 2 })]
    public void Moments_follow_the_frequencies(int seed, int[] counts)
    {
        SpinSystem system = Systems.Random(seed, counts, 50, 25);
        Transition[] lines = SpinSimulation.Simulate(system, Systems.All);
        double spins = counts.Sum();
        for (int order = 1; order <= 4; order++)
        {
            double expected = system.Sites.Sum(s => s.Count * Math.Pow(s.FrequencyHertz, order)) / spins;
            if (order == 4)
            {
                expected += system.Couplings.Sum(c =>
                    0.5 * system.Sites[c.SiteA].Count * system.Sites[c.SiteB].Count * c.Hertz * c.Hertz
                    * Math.Pow(system.Sites[c.SiteA].FrequencyHertz - system.Sites[c.SiteB].FrequencyHertz, 2)) / spins;
            }

            Assert.Equal(expected, Moment(lines, order), 1e-9 * Math.Pow(50, order));
        }
    }
}
