using System.Globalization;
using Qc.Engine.Verdicts;

namespace Qc.Service.Features.Pages;

/// <summary>One criterion in words.</summary>
/// <param name="Subject">What is limited.</param>
/// <param name="Limit">The limit by prediction.</param>
/// <param name="WithReference">The limit with a reference lot; empty where it is the same.</param>
public sealed record CriterionLine(string Subject, string Limit, string WithReference = "");

/// <summary>Effective criteria as a list that can be read.</summary>
public static class CriteriaLines
{
    /// <summary>All of them, nothing hidden.</summary>
    public static IReadOnlyList<CriterionLine> Of(Criteria criteria)
    {
        IdentityCriteria i = criteria.Identity;
        SuitabilityCriteria s = criteria.Suitability;
        var lines = new List<CriterionLine>
        {
            new(
                "Shift of a CH group",
                $"{N(i.ShiftToleranceStandardUncertainties)} standard uncertainties, at least {N(i.ShiftToleranceMinimumPpm)}, at most {N(i.ShiftToleranceMaximumPpm)} ppm",
                $"{N(i.ShiftToleranceReferencePpm)} ppm"),
            new("Coupling", $"{N(i.CouplingToleranceHertz)} Hz", $"{N(i.CouplingToleranceReferenceHertz)} Hz"),
            new(
                "Proton count of a CH group",
                $"the larger of {N(i.CountTolerancePercent)} % and {N(i.CountToleranceMinimumProtons)} H",
                $"{N(i.CountToleranceReferencePercent)} %"),
            new("Unaccounted signal in one region", $"at most {N(i.UnaccountedRegionMolPercent)} mol %", $"at most {N(i.UnaccountedRegionReferenceMolPercent)} mol %"),
            new("Unaccounted signal in all", $"at most {N(i.UnaccountedTotalMolPercent)} mol %", $"at most {N(i.UnaccountedTotalReferenceMolPercent)} mol %"),
            new(
                "Rivals",
                $"told apart from a log10 evidence ratio of {N(i.RivalLogEvidenceRatio)} on; one that is not {(i.RivalsMustBeToldApart ? "flags the lot" : "is stated only")}; isomers are {(i.GeneratedRivals ? "generated and join the test" : "not generated")}"),
            new("Signal to noise of the largest multiplet", $"at least {N(s.SignalToNoise)}; for an assay {N(s.SignalToNoiseAssay)}"),
            new("Line width at half height", $"at most {N(s.LineWidthHertz)} Hz; below 300 MHz {N(s.LineWidthLowFieldHertz)} Hz"),
            new("Offset of the axis", $"at most {N(s.AxisOffsetPpm)} ppm", $"at most {N(s.AxisOffsetReferencePpm)} ppm"),
            new("Digital resolution", $"at most {N(s.LineWidthsPerPoint)} line widths per point"),
        };
        lines.Add(criteria.Assay is { } assay
            ? new CriterionLine("Assay", $"{N(assay.LowPercent)} to {N(assay.HighPercent)} % (m/m), guard band {N(assay.GuardBandMultiple)} times the expanded uncertainty")
            : new CriterionLine("Assay", "not asked for"));
        lines.Add(new CriterionLine("Release without a reviewer", criteria.ReleaseByException ? "yes, where the lot passes" : "no"));
        return lines;
    }

    private static string N(double value) => value.ToString("0.####", CultureInfo.InvariantCulture);
}
