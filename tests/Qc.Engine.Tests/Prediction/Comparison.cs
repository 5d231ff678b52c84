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
        ImmutableArray<int> signals = Assignment.Of([.. onCarbon.Select(shift => (shift.ShiftPpm, groups[shift.Group].Count))], spectrum.Signals)
            ?? throw new InvalidOperationException($"{spectrum.Id} {spectrum.Name}: the groups {string.Join(',', onCarbon.Select(shift => groups[shift.Group].Count))} do not fill the measured signals.");
        return new Laid(spectrum, expectation, onCarbon, signals);
    }

    /// <summary>
    /// Measured splittings of signals of one group. A single one is compared with the mean of the predicted couplings that are
    /// at least half as large (a sextet shows one number for two couplings); several are compared in order of size.
    /// </summary>
    private static IEnumerable<CouplingPair> CouplingsOf(Laid laid)
    {
        for (int i = 0; i < laid.Groups.Length; i++)
        {
            MeasuredSignal signal = laid.Spectrum.Signals[laid.Signals[i]];
            if (laid.Signals.Count(other => other == laid.Signals[i]) > 1 || signal.CouplingsHertz.IsEmpty)
            {
                continue;
            }

            int set = laid.Expectation.Protons.Sets.First(set => set.Group == laid.Groups[i].Group).Index;
            ImmutableArray<ExpectedCoupling> expected =
            [
                .. laid.Expectation.Couplings
                    .Where(coupling => coupling.SetA == set || coupling.SetB == set)
                    .DistinctBy(coupling => coupling.Parameter)
                    .OrderByDescending(coupling => Math.Abs(coupling.Hertz)),
            ];
            if (signal.CouplingsHertz is [double only])
            {
                ImmutableArray<ExpectedCoupling> similar = [.. expected.Where(coupling => Math.Abs(coupling.Hertz) >= 0.5 * only)];
                yield return similar.IsEmpty
                    ? new CouplingPair(laid.Spectrum, signal, only, 0, "none")
                    : new CouplingPair(laid.Spectrum, signal, only, similar.Average(coupling => Math.Abs(coupling.Hertz)), similar[0].Row);
                continue;
            }

            foreach ((double measured, int rank) in signal.CouplingsHertz.OrderDescending().Select((measured, rank) => (measured, rank)))
            {
                yield return rank < expected.Length
                    ? new CouplingPair(laid.Spectrum, signal, measured, Math.Abs(expected[rank].Hertz), expected[rank].Row)
                    : new CouplingPair(laid.Spectrum, signal, measured, 0, "none");
            }
        }
    }

    private sealed record Laid(MeasuredSpectrum Spectrum, Expectation Expectation, ImmutableArray<ExpectedShift> Groups, ImmutableArray<int> Signals);
}
