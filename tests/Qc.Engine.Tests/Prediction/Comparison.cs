using System.Collections.Immutable;
using Qc.Engine.Prediction;
using Qc.Engine.Structures;

namespace Qc.Engine.Tests.Prediction;

/// <summary>A predicted shift beside the measured one.</summary>
public sealed record ShiftPair(MeasuredSpectrum Spectrum, MeasuredSignal Signal, ExpectedShift Expected)
{
    public double DeviationPpm => Expected.ShiftPpm - Signal.ShiftPpm;

    public bool IsWithin95Percent => Math.Abs(DeviationPpm) <= 1.96 * Expected.StandardUncertaintyPpm;
}

/// <summary>A predicted coupling beside the measured one, both without sign.</summary>
public sealed record CouplingPair(MeasuredSpectrum Spectrum, MeasuredSignal Signal, double MeasuredHertz, double ExpectedHertz, string Row)
{
    public double DeviationHertz => ExpectedHertz - MeasuredHertz;

    public bool IsUnsaturated => new[] { "alkene", "vinyl", "acryl", "enone", "enal", "styrene", "maleate", "cinnamate", "benzene", "pyridine", "furan", "thiophene", "pyrrole" }
        .Any(start => Row.StartsWith(start, StringComparison.Ordinal));
}

/// <summary>All measured spectra laid beside their predictions; computed once.</summary>
public static class Comparison
{
    // In assigning, a splitting that is wrong by 10 Hz weighs as much as a shift that is wrong by 0.1 ppm.
    private const double PpmPerHertz = 0.01;

    /// <summary>Predictions by spectrum, and the assignment of their groups on carbon to signals.</summary>
    private static readonly ImmutableArray<Laid> Spectra = [.. MeasuredSpectra.All.Select(Lay)];

    public static readonly ImmutableArray<ShiftPair> Shifts =
        [.. Spectra.SelectMany(laid => laid.Signals.Select((signal, i) => new ShiftPair(laid.Spectrum, laid.Spectrum.Signals[signal], laid.Groups[i])))];

    public static readonly ImmutableArray<CouplingPair> Couplings = [.. Spectra.SelectMany(CouplingsOf)];

    private static Laid Lay(MeasuredSpectrum spectrum)
    {
        Molecule molecule = Examples.Read(spectrum.Smiles);
        Expectation expectation = Predictor.Predict(molecule, Topicity.Groups(molecule), spectrum.Solvent);
        ImmutableArray<ProtonGroup> groups = expectation.Protons.Groups;
        ImmutableArray<ExpectedShift> onCarbon = [.. expectation.Shifts.Where(shift => groups[shift.Group].Lability == Lability.Fixed)];
        ImmutableArray<ImmutableArray<(double Hertz, string Row)>> splittings = [.. onCarbon.Select(shift => SplittingsOf(expectation, shift.Group))];
        ImmutableArray<int> signals = Assignment.Of(
            [.. onCarbon.Select(shift => groups[shift.Group].Count)],
            [.. spectrum.Signals.Select(signal => signal.Protons)],
            (group, signal) => Math.Abs(onCarbon[group].ShiftPpm - spectrum.Signals[signal].ShiftPpm)
                + (PpmPerHertz * Pair(spectrum, spectrum.Signals[signal], splittings[group]).Sum(pair => Math.Abs(pair.DeviationHertz))))
            ?? throw new InvalidOperationException($"{spectrum.Id} {spectrum.Name}: the groups {string.Join(',', onCarbon.Select(shift => groups[shift.Group].Count))} do not fill the measured signals.");
        return new Laid(spectrum, onCarbon, splittings, signals);
    }

    private static IEnumerable<CouplingPair> CouplingsOf(Laid laid) =>
        Enumerable.Range(0, laid.Groups.Length)
            .Where(i => laid.Signals.Count(other => other == laid.Signals[i]) == 1)
            .SelectMany(i => Pair(laid.Spectrum, laid.Spectrum.Signals[laid.Signals[i]], laid.Splittings[i]));

    /// <summary>Distinct couplings of a group, to protons and other nuclei, without sign, largest first.</summary>
    private static ImmutableArray<(double Hertz, string Row)> SplittingsOf(Expectation expectation, int group)
    {
        int set = expectation.Protons.Sets.First(set => set.Group == group).Index;
        return
        [
            .. expectation.Couplings
                .Where(coupling => coupling.SetA == set || coupling.SetB == set)
                .DistinctBy(coupling => coupling.Parameter)
                .Select(coupling => (Math.Abs(coupling.Hertz), coupling.Row))
                .Concat(expectation.HeteroCouplings.Where(coupling => coupling.Set == set).Select(coupling => (Math.Abs(coupling.Hertz), coupling.Row)))
                .OrderByDescending(splitting => splitting.Item1),
        ];
    }

    /// <summary>
    /// Measured splittings beside expected ones. A single one is compared with the mean of the expected couplings that are
    /// at least half as large (a sextet shows one number for two couplings); several are compared in order of size.
    /// </summary>
    private static IEnumerable<CouplingPair> Pair(MeasuredSpectrum spectrum, MeasuredSignal signal, ImmutableArray<(double Hertz, string Row)> expected)
    {
        if (signal.CouplingsHertz is [double only])
        {
            ImmutableArray<(double Hertz, string Row)> similar = [.. expected.Where(splitting => splitting.Hertz >= 0.5 * only)];
            return
            [
                similar.IsEmpty
                    ? new CouplingPair(spectrum, signal, only, 0, "none")
                    : new CouplingPair(spectrum, signal, only, similar.Average(splitting => splitting.Hertz), similar[0].Row),
            ];
        }

        return signal.CouplingsHertz.OrderDescending().Select((measured, rank) => rank < expected.Length
            ? new CouplingPair(spectrum, signal, measured, expected[rank].Hertz, expected[rank].Row)
            : new CouplingPair(spectrum, signal, measured, 0, "none"));
    }

    private sealed record Laid(
        MeasuredSpectrum Spectrum,
        ImmutableArray<ExpectedShift> Groups,
        ImmutableArray<ImmutableArray<(double Hertz, string Row)>> Splittings,
        ImmutableArray<int> Signals);
}
