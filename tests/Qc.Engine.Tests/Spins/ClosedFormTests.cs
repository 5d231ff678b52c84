using Qc.Engine.Spins;
using Xunit;

namespace Qc.Engine.Tests.Spins;

public class ClosedFormTests
{
    public static TheoryData<string> Cases => new(SpinReference.Cases);

    [Theory]
    [MemberData(nameof(Cases))]
    public void Lines_are_those_of_the_reference(string name)
    {
        SpinReference.Line[] expected = SpinReference.Lines(name);
        Transition[] actual = SpinSimulation.Simulate(SpinReference.System(name), Systems.All);

        Assert.NotEmpty(expected);
        foreach (SpinReference.Line line in expected)
        {
            double intensity = actual
                .Where(l => Math.Abs(l.FrequencyHertz - line.Frequency) <= line.FrequencyTolerance).Sum(l => l.Intensity);
            Assert.Equal(line.Intensity, intensity, line.IntensityTolerance);
        }
    }

    [Theory]
    [InlineData(40, 3)]
    [InlineData(10, 8)]
    [InlineData(1, 20)]
    public void The_single_spin_of_AB2_keeps_a_quarter_at_its_own_frequency(double distance, double j)
    {
        Transition[] lines = SpinSimulation.Simulate(Systems.Of([(distance, 1), (0, 2)], (0, 1, j)), Systems.All);
        Assert.Equal(0.25, Systems.IntensityAt(lines.Pairs(), distance), 1e-9);
    }

    [Theory]
    [InlineData(80)]
    [InlineData(10)]
    [InlineData(-3)]
    public void The_methyl_of_an_ethyl_keeps_three_quarters_at_its_own_frequency(double distance)
    {
        Transition[] lines = SpinSimulation.Simulate(Systems.Of([(distance, 3), (0, 2)], (0, 1, 7)), Systems.All);
        Assert.Equal(0.75, Systems.IntensityAt(lines.Pairs(), distance), 1e-9);
    }

    [Theory]
    [InlineData(1)]
    [InlineData(2)]
    [InlineData(3)]
    [InlineData(6)]
    [InlineData(8)]
    public void Far_neighbours_split_into_binomial_multiplets(int n)
    {
        const double J = 7;
        Transition[] lines = SpinSimulation.Simulate(Systems.Of([(0, 1), (1e7, n)], (0, 1, J)), Systems.All);
        for (int k = 0; k <= n; k++)
        {
            double intensity = lines.Where(l => Math.Abs(l.FrequencyHertz - J * (k - 0.5 * n)) < 1e-3).Sum(l => l.Intensity);
            Assert.Equal(Binomial(n, k) / Math.Pow(2, n), intensity, 1e-6);
        }
    }

    private static double Binomial(int n, int k) => k == 0 ? 1 : Binomial(n, k - 1) * (n - k + 1) / k;
}
