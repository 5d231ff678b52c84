using System.Collections.Immutable;
using Qc.Engine.Fitting;
using Qc.Engine.Prediction;
using Qc.Engine.Processing;
using Qc.Engine.Structures;
using Qc.Engine.Verdicts;

namespace Qc.Engine.Rivals;

/// <summary>What a method can say about one rival.</summary>
/// <param name="Name">Its name, or its SMILES where it was generated.</param>
/// <param name="Smiles">SMILES.</param>
/// <param name="Log10Ratio">
/// The smaller of two log10 evidence ratios: the product over the rival on the product's simulated spectrum, and the rival over the
/// product on the rival's.
/// </param>
/// <param name="ToldApart">Whether that reaches the method's limit.</param>
/// <param name="NoticedFromMolPercent">
/// Estimated amount in the product from which the rival's signals would flag a lot as unaccounted, in mol % of the product; null
/// where they hide under the product's at any amount up to a tenth.
/// </param>
public sealed record SpecificityLine(string Name, string Smiles, double Log10Ratio, bool ToldApart, double? NoticedFromMolPercent);

/// <summary>What a method can tell apart.</summary>
/// <param name="Lines">Rivals put to the test, those least told apart first.</param>
/// <param name="Considered">Number of generated structures of which these are the nearest.</param>
/// <param name="IsComplete">Whether those were all isomers that the filters keep.</param>
public sealed record SpecificityReport(ImmutableArray<SpecificityLine> Lines, int Considered, bool IsComplete);

/// <summary>
/// The specificity of a method before it is released (the idea of ICH Q2(R2), specificity): simulated spectra of the product, of
/// each near rival and of both together are judged as a lot's spectrum would be. Simulation and judgement share the predicted
/// shifts, so the report says what line patterns and predicted differences can do, not how right the predictions are.
/// </summary>
public static class Specificity
{
    /// <summary>Share of a rival in the mixture that is simulated, relative to the product.</summary>
    private const double MixedShare = 0.10;

    /// <summary>Makes the report. Pure: the same question gives the same report.</summary>
    /// <param name="product">The product.</param>
    /// <param name="named">Rivals that the method owner named; all are put to the test.</param>
    /// <param name="solvent">The method's solvent.</param>
    /// <param name="criteria">The method's criteria.</param>
    /// <param name="conditions">Field, width and noise of the simulated measurements.</param>
    /// <param name="mostGenerated">Number of generated rivals put to the test, nearest first.</param>
    /// <param name="progress">Told the share done, 0 to 1, after each rival; may be null.</param>
    /// <param name="cancellation">Gives up.</param>
    /// <exception cref="OperationCanceledException">The caller gave up.</exception>
    public static SpecificityReport Of(
        NamedStructure product,
        ImmutableArray<NamedStructure> named,
        string solvent,
        Criteria criteria,
        SimulationConditions conditions,
        int mostGenerated,
        Action<double>? progress,
        CancellationToken cancellation)
    {
        Expectation Expect(Molecule molecule) => Predictor.Predict(molecule, Topicity.Groups(molecule), solvent);
        Expectation expected = Expect(product.Structure);
        var input = new FitInput { Spectrum = SimulatedSpectrum.Of(conditions, (expected, 1)), Product = expected };
        FitResult fit = SpectrumFit.Run(input, cancellation);
        RivalCandidates found = Neighbours.Of(product.Structure, new NeighbourOptions(), cancellation);
        HashSet<string> known = [.. named.Where(r => r.Structure.Atoms.Length <= StructureForm.MostAtoms).Select(r => StructureForm.Of(r.Structure))];
        RivalCandidate[] candidates = [.. found.Candidates.Where(c => !known.Contains(StructureForm.Of(c.Structure)))];
        NamedStructure[] rivals =
        [
            .. named,
            .. RivalScreen.Rank(product.Structure, input, fit, solvent, candidates, cancellation).Take(mostGenerated)
                .Select(r => r.Candidate.Structure)
                .Select(structure => new NamedStructure(SmilesWriter.Write(structure), SmilesWriter.Write(structure), structure)),
        ];
        var lines = new List<SpecificityLine>(rivals.Length);
        foreach (NamedStructure rival in rivals)
        {
            Expectation other = Expect(rival.Structure);
            double onProduct = fit.LogEvidence - SpectrumFit.Run(input with { Product = other }, cancellation).LogEvidence;
            FitInput swapped = input with { Spectrum = SimulatedSpectrum.Of(conditions, (other, 1)) };
            double onRival = SpectrumFit.Run(swapped with { Product = other }, cancellation).LogEvidence
                - SpectrumFit.Run(swapped, cancellation).LogEvidence;
            double ratio = Math.Min(onProduct, onRival) / Math.Log(10);
            lines.Add(new SpecificityLine(
                rival.Name,
                rival.Smiles,
                ratio,
                ratio >= criteria.Identity.RivalLogEvidenceRatio,
                NoticedFrom(input, other, conditions, criteria.Identity, cancellation)));
            progress?.Invoke((double)lines.Count / rivals.Length);
        }

        return new SpecificityReport([.. lines.OrderBy(line => line.Log10Ratio)], candidates.Length, found.IsComplete);
    }

    /// <summary>
    /// From a mixture: signal left over in its largest region, and in all, grows in proportion to the amount; the limit is met
    /// where either reaches its criterion.
    /// </summary>
    private static double? NoticedFrom(
        FitInput input, Expectation rival, SimulationConditions conditions, IdentityCriteria criteria, CancellationToken cancellation)
    {
        Spectrum mixture = SimulatedSpectrum.Of(conditions, (input.Product, 1), (rival, MixedShare));
        FitResult fit = SpectrumFit.Run(input with { Spectrum = mixture }, cancellation);
        double protons = input.Product.Protons.Groups.Where(g => g.Lability == Lability.Fixed).Sum(g => g.Count);
        if (fit.AreaPerProton <= 0 || protons <= 0 || fit.LeftOver.IsEmpty)
        {
            return null;
        }

        double percent = 100 / (fit.AreaPerProton * protons);
        double region = fit.LeftOver.Max(l => l.Area) * percent / criteria.UnaccountedRegionMolPercent;
        double total = fit.LeftOver.Sum(l => l.Area) * percent / criteria.UnaccountedTotalMolPercent;
        double timesLimit = Math.Max(region, total);
        return timesLimit >= 1 ? 100 * MixedShare / timesLimit : null;
    }
}
