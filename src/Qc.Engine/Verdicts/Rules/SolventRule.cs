namespace Qc.Engine.Verdicts.Rules;

/// <summary>
/// suitability.solvent: the solvent that the spectrum shows is the one that the method prescribes. The recognised one is
/// used to judge.
/// </summary>
internal static class SolventRule
{
    public const string Id = "suitability.solvent";

    public static IEnumerable<Finding> Judge(JudgedSpectrum judged)
    {
        string? recognised = judged.Spectrum.RecognisedSolvent;
        string prescribed = judged.Request.Solvent;
        if (recognised is null)
        {
            yield return new Finding(
                Id, judged.Name, $"No residual solvent signal was recognised; {prescribed} is taken as the method prescribes.", Outcome.Pass);
            yield break;
        }

        bool passes = recognised == prescribed;
        string header = judged.Processing.HeaderSolvent is { } label && label != recognised ? $" The header says {label}." : "";
        yield return new Finding(
            Id,
            judged.Name,
            passes
                ? $"The spectrum shows {recognised}, as the method prescribes.{header}"
                : $"The spectrum shows {recognised}, but the method prescribes {prescribed}; it was judged in {recognised}.{header}",
            passes ? Outcome.Pass : Outcome.Flag);
    }
}
