using Qc.Engine.Fitting;
using Qc.Engine.Processing;
using Qc.Engine.Structures;

namespace Qc.Engine.Verdicts.Rules;

/// <summary>
/// suitability.signalToNoise: height of the product's largest multiplet over twice the standard deviation of the noise.
/// (The pharmacopoeial 2H/h with h the peak-to-peak noise agrees with it where h is four standard deviations.)
/// </summary>
internal static class SignalToNoiseRule
{
    public const string Id = "suitability.signalToNoise";

    public static IEnumerable<Finding> Judge(JudgedSpectrum judged)
    {
        Spectrum spectrum = judged.Spectrum;
        double highest = 0;
        foreach (ProtonGroup group in judged.Expectation.Protons.Groups.Where(judged.IsAsserted))
        {
            GroupFit fit = judged.Fit.Groups[group.Index];
            if (!fit.Found)
            {
                continue;
            }

            int first = Math.Max(0, (int)Math.Ceiling(spectrum.IndexOf(fit.RegionPpm.High)));
            int last = Math.Min(spectrum.Count - 1, (int)Math.Floor(spectrum.IndexOf(fit.RegionPpm.Low)));
            for (int i = first; i <= last; i++)
            {
                highest = Math.Max(highest, Math.Min(spectrum.Intensity[i], judged.Fit.Modelled[i]));
            }
        }

        double ratio = highest / (2 * spectrum.NoiseStandardDeviation);
        double needed = judged.Criteria.Assay is null
            ? judged.Criteria.Suitability.SignalToNoise
            : judged.Criteria.Suitability.SignalToNoiseAssay;
        bool passes = ratio >= needed;
        yield return new Finding(
            Id,
            judged.Name,
            $"Signal to noise of the product's largest multiplet is {Say.Whole(ratio)}; at least {Say.Whole(needed)} is needed.",
            passes ? Outcome.Pass : Outcome.Flag,
            ratio,
            null,
            needed,
            null,
            "");
    }
}
