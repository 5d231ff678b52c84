using Qc.Engine.Fitting;

namespace Qc.Engine.Verdicts.Rules;

/// <summary>
/// impurity.known: each known impurity that the model found stays below the limit for unaccounted signal, in mol % of the
/// product, until a specification sets its own.
/// </summary>
internal static class ImpurityRule
{
    public const string Id = "impurity.known";

    public static IEnumerable<Finding> Judge(JudgedSpectrum judged)
    {
        IdentityCriteria identity = judged.Criteria.Identity;
        double limit = judged.HasReference ? identity.UnaccountedRegionReferenceMolPercent : identity.UnaccountedRegionMolPercent;
        double perProton = judged.Fit.AreaPerProton;
        foreach (OtherFit other in judged.Fit.Others.Where(o => o.Role == "impurity" && o.Protons > 0 && perProton > 0))
        {
            double molPercent = 100 * other.Area / other.Protons / perProton;
            double u = molPercent * Math.Sqrt(
                Math.Pow(other.AreaStandardUncertainty / other.Area, 2) + Math.Pow(judged.Fit.AreaPerProtonRelativeUncertainty, 2));
            bool passes = molPercent <= limit;
            yield return new Finding(
                Id,
                other.Name,
                $"{other.Name} is there with {Say.Coarse(molPercent)} mol % of the product; at most {Say.Tenth(limit)} mol % is allowed.",
                passes ? Outcome.Pass : Outcome.Flag,
                molPercent,
                u,
                null,
                limit,
                "mol %",
                other.RegionsPpm);
        }
    }
}
