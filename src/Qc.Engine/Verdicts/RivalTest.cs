using System.Collections.Immutable;
using Qc.Engine.Fitting;
using Qc.Engine.Rivals;
using Qc.Engine.Structures;

namespace Qc.Engine.Verdicts;

/// <summary>What came of all rivals.</summary>
/// <param name="Results">Those reported, closest first.</param>
/// <param name="Generated">Number of generated structures that were looked at.</param>
/// <param name="IsComplete">Whether these are all isomers that the filters keep.</param>
/// <param name="Unresolved">Generated structures that the screen does not tell apart and that were not fitted, closest first.</param>
internal sealed record RivalTest(
    ImmutableArray<RivalResult> Results, int Generated, bool IsComplete, ImmutableArray<RivalResult> Unresolved)
{
    /// <summary>
    /// The screen is coarse, so what it tells apart alone must be this far beyond the limit, in log10. It is meant to understate: its
    /// costs are capped and it does not look at line patterns. Of 84 rivals of the demo's lots the full fit told less in none; in
    /// two simulated cases it told less, by two and three, and still enough.
    /// </summary>
    private const double ScreenMargin = 1;

    private const int MostFitted = 3;
    private const int MostReported = 10;

    /// <summary>Puts the rivals that the method owner named and, where the criteria ask so, generated ones to the test.</summary>
    /// <param name="request">What is asked.</param>
    /// <param name="input">As the expected structure was fitted.</param>
    /// <param name="fit">That fit.</param>
    /// <param name="passesSoFar">
    /// Whether the measurement is fit to be judged and nothing is flagged yet; else generating rivals would take time for nothing.
    /// </param>
    /// <param name="cancellation">Gives up.</param>
    public static RivalTest Run(CheckRequest request, FitInput input, FitResult fit, bool passesSoFar, CancellationToken cancellation)
    {
        string solvent = input.Spectrum.RecognisedSolvent ?? request.Solvent;
        double Ratio(Molecule rival)
        {
            FitResult other = SpectrumFit.Run(input with { Product = SpectrumJudge.Expect(rival, solvent), MisfitShare = fit.MisfitShare }, cancellation);
            return (fit.LogEvidence - other.LogEvidence) / Math.Log(10);
        }

        IdentityCriteria criteria = request.Criteria.Identity;
        List<RivalResult> results =
        [
            .. request.Rivals.Select(rival => (Rival: rival, Ratio: Ratio(rival.Structure)))
                .Select(r => new RivalResult(r.Rival.Name, r.Rival.Smiles, r.Ratio, r.Ratio >= criteria.RivalLogEvidenceRatio)),
        ];

        // Where nothing of the product was found, every structure is as good as another and other findings say so.
        if (!criteria.GeneratedRivals || !passesSoFar || fit.AreaPerProton <= 0)
        {
            return new RivalTest(Sorted(results), 0, false, []);
        }

        RivalCandidates found = Neighbours.Of(request.Product.Structure, NeighbourOptions.Nearest, cancellation);
        HashSet<string> named = [.. request.Rivals.Where(r => r.Structure.Atoms.Length <= StructureForm.MostAtoms).Select(r => StructureForm.Of(r.Structure))];
        RivalCandidate[] candidates = [.. found.Candidates.Where(c => !named.Contains(StructureForm.Of(c.Structure)))];
        ImmutableArray<ScreenedRival> ranked = RivalScreen.Rank(request.Product.Structure, input, fit, solvent, candidates, cancellation);
        double enough = criteria.RivalLogEvidenceRatio + ScreenMargin;
        var unresolved = ImmutableArray.CreateBuilder<RivalResult>();
        for (int i = 0; i < ranked.Length && (ranked[i].Log10Ratio < enough || i < MostReported); i++)
        {
            // The closest is always fitted, so that it is named with a full evidence ratio.
            bool isFitted = i == 0 || (ranked[i].Log10Ratio < enough && i < MostFitted);
            double ratio = isFitted ? Ratio(ranked[i].Candidate.Structure) : ranked[i].Log10Ratio;
            string smiles = SmilesWriter.Write(ranked[i].Candidate.Structure);
            var result = new RivalResult(smiles, smiles, ratio, ratio >= (isFitted ? criteria.RivalLogEvidenceRatio : enough))
            {
                IsGenerated = true,
                IsFitted = isFitted,
            };
            if (!isFitted && !result.ToldApart)
            {
                unresolved.Add(result);
            }

            if (i < MostReported)
            {
                results.Add(result);
            }
        }

        return new RivalTest(Sorted(results), candidates.Length, found.IsComplete, unresolved.ToImmutable());
    }

    /// <summary>Closest first, but estimates of the screen, which are low, after the ratios of full fits.</summary>
    private static ImmutableArray<RivalResult> Sorted(List<RivalResult> results) =>
        [.. results.OrderBy(r => r.ToldApart).ThenByDescending(r => r.IsFitted).ThenBy(r => r.LogEvidenceRatio)];
}
