using System.Collections.Immutable;
using Qc.Engine.Fitting;
using Qc.Engine.Structures;
using Qc.Engine.Values;
using Qc.Engine.Verdicts;

namespace Qc.Engine.Quantities;

/// <summary>Amounts of what the fit found.</summary>
internal static class Amounts
{
    /// <summary>
    /// Impurities in mol % of the product, named ones only, and the product's share by the 100 % method
    /// x = n/Σn over product and named impurities. Unknown substances are not in the sum: they have no proton count.
    /// </summary>
    public static IEnumerable<Quantity> Of(JudgedSpectrum judged)
    {
        double perMolecule = judged.Fit.AreaPerProton;
        if (perMolecule <= 0)
        {
            yield break;
        }

        double sum = 1;
        double variance = 0;
        double scale = judged.Fit.AreaPerProtonRelativeUncertainty;
        foreach (OtherFit other in judged.Fit.Others.Where(o => o.Role == "impurity" && o.Protons > 0))
        {
            double ratio = other.Area / other.Protons / perMolecule;
            double u = ratio * Math.Sqrt(Math.Pow(other.AreaStandardUncertainty / other.Area, 2) + (scale * scale));
            sum += ratio;
            variance += u * u;
            yield return new Quantity(
                other.Name,
                100 * ratio,
                200 * u,
                2,
                "mol % of the product",
                [
                    new BudgetLine("area of the impurity", other.AreaStandardUncertainty / other.Area),
                    new BudgetLine("area per proton of the product", scale),
                ]);
        }

        yield return new Quantity(
            "purity (100 % method, named impurities only)",
            100 / sum,
            200 * Math.Sqrt(variance) / (sum * sum),
            2,
            "mol %",
            [new BudgetLine("sum of the impurities", Math.Sqrt(variance) / sum)]);
    }

    /// <summary>The assay by internal standard, or null where one of its inputs is missing.</summary>
    public static (Quantity Quantity, Uncertain MassFraction)? Assay(JudgedSpectrum judged)
    {
        SampleFacts? sample = judged.Request.Sample;
        OtherFit? standard = judged.Fit.Others.FirstOrDefault(o => o.Role == "internal standard");
        if (sample?.MassMg is not { } mass || sample.InternalStandard is not { } weighed || standard is null || standard.Protons <= 0
            || judged.Fit.AreaPerProton <= 0)
        {
            return null;
        }

        double ratio = judged.Fit.AreaPerProton / (standard.Area / standard.Protons);
        double relative = Math.Sqrt(
            Math.Pow(judged.Fit.AreaPerProtonRelativeUncertainty, 2) + Math.Pow(standard.AreaStandardUncertainty / standard.Area, 2));
        var assay = new InternalStandardAssay
        {
            // Areas are already per proton, so the proton counts are 1 and exact here.
            IntegralRatio = new Uncertain(ratio, ratio * relative),
            AnalyteProtons = new Uncertain(1, 0),
            StandardProtons = new Uncertain(1, 0),
            AnalyteMolarMassGramPerMol = MolarMass.Of(judged.Request.Product.Structure),
            StandardMolarMassGramPerMol = MolarMass.Of(weighed.Substance.Structure),
            AnalyteMassMg = new Uncertain(mass, sample.MassStandardUncertaintyMg),
            StandardMassMg = new Uncertain(weighed.MassMg, sample.MassStandardUncertaintyMg),
            StandardMassFraction = new Uncertain(0.01 * weighed.PurityPercent, 0.01 * weighed.PurityStandardUncertaintyPercent),
        };
        Uncertain w = assay.MassFraction;
        return (new Quantity("assay", 100 * w.Value, 200 * w.StandardUncertainty, 2, "% (m/m)", assay.Budget), w);
    }
}
