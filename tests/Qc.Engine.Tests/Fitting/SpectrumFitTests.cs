using Qc.Engine.Fitting;
using Qc.Engine.Prediction;
using Qc.Engine.Processing;
using Qc.Engine.Spins;
using Xunit;
using Xunit.Abstractions;

namespace Qc.Engine.Tests.Fitting;

public class SpectrumFitTests(ITestOutputHelper output)
{
    // Shifts and couplings of ethyl propanoate in CDCl3 (CHECKVALUES E03, from memory), expected values off by 0.1 ppm and 0.4 Hz.
    private static readonly MadeUpGroup[] EthylPropanoate =
    [
        new(2, 4.12, 4.02), new(2, 2.32, 2.22), new(3, 1.26, 1.34), new(3, 1.14, 1.20),
    ];

    private static readonly (int, int, double, double)[] EthylCouplings = [(0, 2, 7.1, 7.0), (1, 3, 7.6, 7.2)];

    [Theory]
    [InlineData(60)]
    [InlineData(400)]
    [InlineData(600)]
    public void Shifts_couplings_and_counts_of_two_ethyl_groups_are_found(double frequencyMHz)
    {
        Spectrum spectrum = MadeUp.Spectrum(MadeUp.Lines(EthylPropanoate, EthylCouplings, frequencyMHz), frequencyMHz, 500, 1);
        FitResult fit = SpectrumFit.Run(new FitInput
        {
            Spectrum = spectrum,
            Product = MadeUp.Expectation(EthylPropanoate, EthylCouplings),
        });
        foreach (GroupFit group in fit.Groups)
        {
            output.WriteLine($"{group.Group}: {group.ShiftPpm:0.0000} {group.Protons:0.000} misfit {group.PatternMisfit:0.000} alone {group.Alone} {group.RegionPpm}");
        }

        output.WriteLine(string.Join(' ', fit.Couplings.Select(c => $"{c.Hertz:0.000}±{c.StandardUncertaintyHertz:0.000}")));
        output.WriteLine($"converged {fit.Converged} width {fit.WidthHertz:0.000} left {fit.LeftOver.Length}");
        for (int g = 0; g < EthylPropanoate.Length; g++)
        {
            Assert.Equal(EthylPropanoate[g].TruePpm, fit.Groups[g].ShiftPpm, 0.002);
            Assert.Equal(EthylPropanoate[g].Count, fit.Groups[g].Protons, 0.02 * EthylPropanoate[g].Count);
        }

        Assert.Equal(7.1, fit.Couplings[0].Hertz, 0.1);
        Assert.Equal(7.6, fit.Couplings[1].Hertz, 0.1);
        Assert.Empty(fit.LeftOver);
    }
}
