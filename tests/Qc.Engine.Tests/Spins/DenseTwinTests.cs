using Qc.Engine.Spins;
using Xunit;

namespace Qc.Engine.Tests.Spins;

public class DenseTwinTests
{
    public static TheoryData<int, int[]> Shapes => new()
    {
        { 1, [1, 1] }, { 2, [1, 2] }, { 3, [1, 1, 1] }, { 4, [2, 2] }, { 5, [3, 2] }, { 6, [1, 1, 1, 1] }, { 7, [3, 1, 1] },
        { 8, [2, 2, 1] }, { 9, [3, 2, 2] }, { 10, [1, 1, 1, 1, 1, 1] }, { 11, [6, 1] }, { 12, [1, 3, 1, 2] }, { 13, [4, 3] },
        { 14, [1, 1, 1, 1, 1, 1, 1] },
    };

    [Theory]
    [MemberData(nameof(Shapes))]
    public void Lines_are_those_of_the_full_matrix(int seed, int[] counts)
    {
        SpinSystem system = Systems.Random(seed, counts, 60, 20);
        List<(double Frequency, double Intensity)> expected = DenseTwin.Lines(system);
        List<(double Frequency, double Intensity)> actual = SpinSimulation.Simulate(system, Systems.All).Pairs();

        foreach ((double frequency, _) in expected.Concat(actual).Where(l => l.Intensity > 1e-9))
        {
            Assert.Equal(Systems.IntensityAt(expected, frequency), Systems.IntensityAt(actual, frequency), 1e-8);
        }
    }

    [Theory]
    [MemberData(nameof(Shapes))]
    public void Dropping_and_merging_stay_within_a_tenth_of_a_percent(int seed, int[] counts)
    {
        SpinSystem system = Systems.Random(seed, counts, 60, 20);
        Transition[] all = SpinSimulation.Simulate(system, Systems.All);
        Transition[] kept = SpinSimulation.Simulate(system);

        Assert.True(kept.Length <= all.Length);
        Assert.Equal(counts.Sum(), kept.Sum(l => l.Intensity), 1e-9);
        foreach (Transition line in kept.Where(l => l.Intensity > 0.01))
        {
            double whole = all.Where(l => Math.Abs(l.FrequencyHertz - line.FrequencyHertz) < 1e-4).Sum(l => l.Intensity);
            double here = kept.Where(l => Math.Abs(l.FrequencyHertz - line.FrequencyHertz) < 1e-4).Sum(l => l.Intensity);
            Assert.Equal(whole, here, 1e-3 * whole);
        }
    }
}
