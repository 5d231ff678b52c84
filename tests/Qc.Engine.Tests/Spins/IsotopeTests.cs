using Qc.Engine.Spins;
using Xunit;

namespace Qc.Engine.Tests.Spins;

public class IsotopeTests
{
    [Theory]
    [InlineData(0, new[] { 1.0 })]
    [InlineData(1, new[] { 1.0, 1, 1 })]
    [InlineData(2, new[] { 1.0, 2, 3, 2, 1 })]
    [InlineData(3, new[] { 1.0, 3, 6, 7, 6, 3, 1 })]
    public void Deuterons_split_into_trinomial_patterns(int deuterons, double[] weights)
    {
        Transition[] lines = Deuterated.Pattern(deuterons, 1.7);
        Assert.Equal(weights.Length, lines.Length);
        for (int k = 0; k < weights.Length; k++)
        {
            Assert.Equal(weights[k] / weights.Sum(), lines[k].Intensity, 1e-12);
            Assert.Equal(1.7 * (k - deuterons), lines[k].FrequencyHertz, 1e-12);
        }
    }

    [Fact]
    public void A_methyl_singlet_has_two_satellites_of_half_a_percent()
    {
        Isotopomer labelled = CarbonSatellites.Of(Systems.Of([(820, 3)]), 0, 3, 128, isotopeShiftHertz: 0.8);
        Transition[] lines = SpinSimulation.Simulate(labelled.System);

        // 13C 1.07 %: each satellite 0.535 % of the integral.
        Assert.Equal(0.0107, labelled.Share, 1e-12);
        Assert.Equal([820 - 0.8 - 64, 820 - 0.8 + 64], lines.Select(l => l.FrequencyHertz));
        Assert.All(lines, l => Assert.Equal(0.00535, l.Intensity / 3 * labelled.Share, 1e-9));
    }

    [Fact]
    public void The_satellites_of_a_symmetric_alkene_show_the_coupling_that_the_singlet_hides()
    {
        // Maleic acid: =CH– twice, 3J(HH) 12 Hz. In the labelled form the two protons are AB, 84 Hz apart: D² = 84² + 12².
        const double J = 12;
        const double OneBond = 168;
        Isotopomer labelled = CarbonSatellites.Of(Systems.Of([(0, 2)]), 0, 1, OneBond, toRestHertz: J);
        Transition[] lines = SpinSimulation.Simulate(labelled.System, Systems.All);

        Assert.Equal(2 * 0.0107 * 0.9893, labelled.Share, 1e-12);
        Assert.Equal(2, lines.Sum(l => l.Intensity), 1e-9);
        double d = Math.Sqrt(OneBond / 2 * OneBond / 2 + J * J);
        foreach (int side in new[] { -1, 1 })
        {
            double centre = side * OneBond / 4;
            foreach (double offset in new[] { (d - J) / 2, (d + J) / 2 })
            {
                double intensity = 0.25 * (1 + (offset < d / 2 ? J : -J) / d);
                Assert.Equal(intensity, Systems.IntensityAt(lines.Pairs(), centre + side * offset), 1e-9);
            }
        }
    }

    [Fact]
    public void The_rest_of_a_labelled_site_keeps_its_couplings()
    {
        // Without isotope shift, 1J and coupling to the rest, labelling must not show at all.
        SpinSystem plain = Systems.Of([(100, 4), (160, 1)], (0, 1, 6.5));
        Isotopomer labelled = CarbonSatellites.Of(plain, 0, 2, 0);
        List<(double Frequency, double Intensity)> expected = SpinSimulation.Simulate(plain, Systems.All).Pairs();
        List<(double Frequency, double Intensity)> actual = SpinSimulation.Simulate(labelled.System, Systems.All).Pairs();
        foreach ((double frequency, double _) in expected.Concat(actual).Where(l => l.Intensity > 1e-7))
        {
            Assert.Equal(Systems.IntensityAt(expected, frequency), Systems.IntensityAt(actual, frequency), 1e-7);
        }
    }

    [Theory]
    [InlineData(1, 1)]
    [InlineData(2, 1)]
    [InlineData(0, 2)]
    [InlineData(0, 0)]
    public void Satellites_of_nothing_are_refused(int site, int protonsOnCarbon)
    {
        var system = new SpinSystem([new SpinSite(0, 3), new SpinSite(0, 1, false)], []);
        Assert.Throws<ArgumentException>(() => CarbonSatellites.Of(system, site, protonsOnCarbon, 128));
    }
}
