using System.Collections.Immutable;
using System.Globalization;
using Xunit;
using Xunit.Abstractions;

namespace Qc.Engine.Tests.Prediction;

/// <summary>
/// The engine's bar for predictions, on measured spectra: rows used for the fit and rows in the tables are shown, but only the check
/// half decides (see tests/reference/README.md).
/// </summary>
public class AccuracyTests(ITestOutputHelper output)
{
    [Fact]
    public void Shifts_in_chloroform_are_within_the_bar_on_the_check_half()
    {
        Report("fit half, CDCl3", Half(isForFit: true, inChloroform: true));
        Report("fit half, other solvents", Half(isForFit: true, inChloroform: false));
        Report("check half, other solvents", Half(isForFit: false, inChloroform: false));
        Report("substances that are in the tables", [.. Comparison.Shifts.Where(pair => MeasuredSpectra.InTables.Contains(pair.Spectrum.Id))]);
        ImmutableArray<ShiftPair> check = Half(isForFit: false, inChloroform: true);
        Report("check half, CDCl3", check);

        Assert.True(check.Length > 150, "too few signals to judge by");
        Assert.InRange(MeanDeviation(check), 0, 0.15);
        Assert.InRange(Coverage(check), 0.93, 0.98);
    }

    [Fact]
    public void Intervals_hold_in_other_solvents_too()
    {
        ImmutableArray<ShiftPair> check = Half(isForFit: false, inChloroform: false);

        Assert.NotEmpty(check);
        Assert.InRange(Coverage(check), 0.90, 1.0);
        Assert.InRange(MeanDeviation(check), 0, 0.25);
    }

    [Fact]
    public void No_shift_that_is_half_a_ppm_off_claims_to_be_sure() =>
        Assert.DoesNotContain(Comparison.Shifts, pair => Math.Abs(pair.DeviationPpm) > 0.5 && pair.Expected.StandardUncertaintyPpm < 0.2);

    [Fact]
    public void Couplings_are_within_the_bar()
    {
        ImmutableArray<CouplingPair> unsaturated = [.. Comparison.Couplings.Where(pair => pair.IsUnsaturated)];
        ImmutableArray<CouplingPair> alkyl = [.. Comparison.Couplings.Where(pair => !pair.IsUnsaturated)];
        foreach (CouplingPair pair in Comparison.Couplings.OrderByDescending(pair => Math.Abs(pair.DeviationHertz)).Take(5))
        {
            output.WriteLine(string.Create(CultureInfo.InvariantCulture,
                $"{pair.Spectrum.Id} {pair.Spectrum.Name} {pair.Signal.Label}: {pair.ExpectedHertz:F1} Hz, measured {pair.MeasuredHertz:F1} ({pair.Row})"));
        }

        double unsaturatedHertz = unsaturated.Average(pair => Math.Abs(pair.DeviationHertz));
        double alkylHertz = alkyl.Average(pair => Math.Abs(pair.DeviationHertz));
        output.WriteLine(string.Create(CultureInfo.InvariantCulture,
            $"alkene and aromatic: n = {unsaturated.Length}, mean deviation {unsaturatedHertz:F2} Hz; alkyl: n = {alkyl.Length}, {alkylHertz:F2} Hz"));

        Assert.InRange(unsaturatedHertz, 0, 0.8);
        Assert.InRange(alkylHertz, 0, 0.6);
    }

    private static ImmutableArray<ShiftPair> Half(bool isForFit, bool inChloroform) =>
    [
        .. Comparison.Shifts.Where(pair => pair.Spectrum.IsForFit == isForFit
            && (pair.Spectrum.Solvent == "CDCl3") == inChloroform
            && !MeasuredSpectra.InTables.Contains(pair.Spectrum.Id)),
    ];

    private static double MeanDeviation(ImmutableArray<ShiftPair> pairs) => pairs.Average(pair => Math.Abs(pair.DeviationPpm));

    private static double Coverage(ImmutableArray<ShiftPair> pairs) => pairs.Average(pair => pair.IsWithin95Percent ? 1.0 : 0.0);

    private void Report(string name, ImmutableArray<ShiftPair> pairs)
    {
        output.WriteLine(string.Create(CultureInfo.InvariantCulture,
            $"{name}: n = {pairs.Length}, mean deviation {MeanDeviation(pairs):F3} ppm, 95 % intervals hold in {Coverage(pairs):P1}; worst five:"));
        foreach (ShiftPair pair in pairs.OrderByDescending(pair => Math.Abs(pair.DeviationPpm)).Take(5))
        {
            output.WriteLine(string.Create(CultureInfo.InvariantCulture,
                $"  {pair.Spectrum.Id} {pair.Spectrum.Name} {pair.Signal.Label}: {pair.Expected.ShiftPpm:F2} +- {pair.Expected.StandardUncertaintyPpm:F2}, measured {pair.Signal.ShiftPpm:F2} [{string.Join(' ', pair.Expected.Rows)}]"));
        }
    }
}
