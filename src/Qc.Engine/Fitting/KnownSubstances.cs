using System.Collections.Immutable;
using Qc.Engine.Data;

namespace Qc.Engine.Fitting;

/// <summary>The rows of the substance table as line patterns.</summary>
public static class KnownSubstances
{
    /// <summary>Neighbours and coupling (Hz) by which a second-order multiplet of an impurity is drawn.</summary>
    private const int NeighboursOfMultiplet = 4;
    private const double CouplingOfMultipletHertz = 6.5;

    /// <summary>Solvent, water, reference and impurities in a solvent; signals that exchange are left out but for water's.</summary>
    public static ImmutableArray<KnownSubstance> In(string solvent) =>
    [
        .. SubstanceTable.In(solvent)
            .Where(s => !s.Exchangeable || s.Role == "water")
            .GroupBy(s => (s.Substance, s.Role))
            .Select(g => new KnownSubstance(g.Key.Substance, g.Key.Role, [.. g.Select(Signal)])),
    ];

    private static KnownSignal Signal(SubstanceSignal row) => new(row.ShiftPpm, Tolerance(row), row.Protons, Lines(row));

    /// <summary>Standard uncertainty of the place in ppm, on a referenced axis.</summary>
    private static double Tolerance(SubstanceSignal row) => row.Role switch
    {
        "water" => 0.12,
        "reference" => 0.01,
        "solvent" => row.Solvent == "CDCl3" ? 0.02 : 0.012,
        _ => 0.02,
    };

    private static ImmutableArray<(double OffsetHertz, double Intensity)> Lines(SubstanceSignal row) => row.Multiplicity switch
    {
        "d" => FixedPatternSource.FirstOrder(row.Protons, (1, row.Hertz)),
        "t" => FixedPatternSource.FirstOrder(row.Protons, (2, row.Hertz)),
        "q" => FixedPatternSource.FirstOrder(row.Protons, (3, row.Hertz)),
        "sept" => FixedPatternSource.FirstOrder(row.Protons, (6, row.Hertz)),
        "m" => FixedPatternSource.FirstOrder(row.Protons, (NeighboursOfMultiplet, CouplingOfMultipletHertz)),
        "quint-D" => Deuterium(row, [1, 2, 3, 2, 1]),
        "trip-D" => Deuterium(row, [1, 1, 1]),
        _ => FixedPatternSource.FirstOrder(row.Protons),
    };

    private static ImmutableArray<(double OffsetHertz, double Intensity)> Deuterium(SubstanceSignal row, double[] pattern)
    {
        double sum = pattern.Sum();
        return [.. pattern.Select((p, i) => ((((pattern.Length - 1) / 2.0) - i) * row.Hertz, row.Protons * p / sum))];
    }
}
