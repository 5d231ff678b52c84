using System.Collections.Immutable;

namespace Qc.Engine.Processing;

/// <summary>What the axis of a spectrum rests on.</summary>
/// <param name="CorrectionPpm">To be added to the axis; null where nothing was found to rest it on.</param>
/// <param name="By">"TMS", "DSS", "residual solvent" or "file".</param>
/// <param name="Solvent">Solvent that the spectrum shows, null where none was recognised.</param>
internal sealed record AxisReference(double? CorrectionPpm, string By, string? Solvent);

/// <summary>
/// References the axis: by TMS or DSS where it is there, else by the residual solvent, else not at all. Anything from
/// silicone grease (0.07 ppm) to a silyl group of the product may lie near 0 ppm. So a line is taken for the reference only
/// at the file's zero, or, further off, at the distance from the solvent's signal that the tables state.
/// </summary>
internal static class Referencing
{
    private const double ReachPpm = 0.5;
    private const double AtZeroPpm = 0.03;
    private const double FromPatternPpm = 0.04;
    private const double SmallestSolventCorrectionPpm = 0.03;
    private const double WidestReferenceHertz = 4;

    public static AxisReference Find(Spectrum spectrum, ImmutableArray<MeasuredSignal> signals, string? prescribed, string? header)
    {
        ImmutableArray<Maximum> maxima = [.. signals.SelectMany(s => s.Maxima)];
        var lone = new LoneLines(maxima, spectrum);
        ImmutableArray<double> zeros = [.. lone.Near(0, ReachPpm, WidestReferenceHertz).Select(lone.Ppm)];
        ImmutableArray<string> named = [.. new[] { prescribed, header }.OfType<string>().Distinct()];
        SolventEvidence? solvent = new SolventRecognition(spectrum, maxima, lone, named, zeros).Find();
        if (FindZero(zeros, solvent) is { } zero)
        {
            return new AxisReference(-zero, solvent?.Solvent == "D2O" ? "DSS" : "TMS", solvent?.Solvent);
        }

        return solvent is { } seen && CorrectionBy(seen) is { } correction
            ? new AxisReference(correction, "residual solvent", seen.Solvent)
            : new AxisReference(null, "file", solvent?.Solvent);
    }

    private static double? FindZero(ImmutableArray<double> zeros, SolventEvidence? solvent)
    {
        double? Nearest(double expected, double reach) =>
            zeros.Where(z => Math.Abs(z - expected) <= reach).OrderBy(z => Math.Abs(z - expected)).Select(z => (double?)z).FirstOrDefault();
        return solvent switch
        {
            { ByPattern: true } s => Nearest(s.OffsetPpm, FromPatternPpm),
            { Solvent: "CDCl3" } s when SolventRecognition.IsPlaceOfChloroform(7.26 + s.OffsetPpm) => Nearest(0, AtZeroPpm),
            { Solvent: "CDCl3" } s => Nearest(s.OffsetPpm, FromPatternPpm),
            { Solvent: "D2O" } s => Nearest(0, AtZeroPpm)
                ?? zeros.Where(z => SolventRecognition.IsPlaceOfHdo(4.79 + s.OffsetPpm - z)).OrderBy(Math.Abs).Select(z => (double?)z).FirstOrDefault(),
            _ => Nearest(0, AtZeroPpm),
        };
    }

    /// <summary>
    /// What the residual signal says of the axis. Less than 0.03 ppm is not applied, the tables being no better; nor is what
    /// concentration does to CHCl3. HDO moves 0.011 ppm per kelvin and says nothing.
    /// </summary>
    private static double? CorrectionBy(SolventEvidence solvent) => solvent.Solvent switch
    {
        "D2O" => null,
        "CDCl3" when SolventRecognition.IsPlaceOfChloroform(7.26 + solvent.OffsetPpm) => 0,
        _ => Math.Abs(solvent.OffsetPpm) < SmallestSolventCorrectionPpm ? 0 : -solvent.OffsetPpm,
    };
}
