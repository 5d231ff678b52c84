using Qc.Engine.Verdicts;
using Qc.Service.Http;

namespace Qc.Service.Features.Specifications;

/// <summary>Refuses limits that cannot be meant: negative tolerances, empty ranges. Nothing is repaired silently.</summary>
internal static class CriteriaCheck
{
    public static Problem? Of(SpecificationRequest request)
    {
        var errors = new List<FieldError>();
        if (request.Identity is null || request.Suitability is null)
        {
            return Problem.InvalidField(request.Identity is null ? "/identity" : "/suitability", "Leave the block out, or give an object.");
        }

        IdentityCriteria identity = request.Identity;
        Positive(errors, "/identity/shiftToleranceStandardUncertainties", identity.ShiftToleranceStandardUncertainties);
        Positive(errors, "/identity/shiftToleranceMinimumPpm", identity.ShiftToleranceMinimumPpm);
        Positive(errors, "/identity/shiftToleranceMaximumPpm", identity.ShiftToleranceMaximumPpm);
        Positive(errors, "/identity/shiftToleranceReferencePpm", identity.ShiftToleranceReferencePpm);
        Positive(errors, "/identity/couplingToleranceHertz", identity.CouplingToleranceHertz);
        Positive(errors, "/identity/couplingToleranceReferenceHertz", identity.CouplingToleranceReferenceHertz);
        Positive(errors, "/identity/countTolerancePercent", identity.CountTolerancePercent);
        Positive(errors, "/identity/countToleranceMinimumProtons", identity.CountToleranceMinimumProtons);
        Positive(errors, "/identity/countToleranceReferencePercent", identity.CountToleranceReferencePercent);
        Positive(errors, "/identity/unaccountedRegionMolPercent", identity.UnaccountedRegionMolPercent);
        Positive(errors, "/identity/unaccountedTotalMolPercent", identity.UnaccountedTotalMolPercent);
        Positive(errors, "/identity/unaccountedRegionReferenceMolPercent", identity.UnaccountedRegionReferenceMolPercent);
        Positive(errors, "/identity/unaccountedTotalReferenceMolPercent", identity.UnaccountedTotalReferenceMolPercent);
        Positive(errors, "/identity/rivalLogEvidenceRatio", identity.RivalLogEvidenceRatio);
        if (identity.ShiftToleranceMaximumPpm < identity.ShiftToleranceMinimumPpm)
        {
            errors.Add(new FieldError("/identity/shiftToleranceMaximumPpm", "It must not be below shiftToleranceMinimumPpm."));
        }

        SuitabilityCriteria suitability = request.Suitability;
        Positive(errors, "/suitability/signalToNoise", suitability.SignalToNoise);
        Positive(errors, "/suitability/signalToNoiseAssay", suitability.SignalToNoiseAssay);
        Positive(errors, "/suitability/lineWidthHertz", suitability.LineWidthHertz);
        Positive(errors, "/suitability/lineWidthLowFieldHertz", suitability.LineWidthLowFieldHertz);
        Positive(errors, "/suitability/axisOffsetPpm", suitability.AxisOffsetPpm);
        Positive(errors, "/suitability/axisOffsetReferencePpm", suitability.AxisOffsetReferencePpm);
        Positive(errors, "/suitability/lineWidthsPerPoint", suitability.LineWidthsPerPoint);
        if (request.Assay is { } assay)
        {
            Positive(errors, "/assay/lowPercent", assay.LowPercent);
            Positive(errors, "/assay/repetitionTimeSeconds", assay.RepetitionTimeSeconds);
            if (assay.HighPercent <= assay.LowPercent)
            {
                errors.Add(new FieldError("/assay/highPercent", "It must be above lowPercent."));
            }

            if (assay.GuardBandMultiple < 0)
            {
                errors.Add(new FieldError("/assay/guardBandMultiple", "It must be zero or more."));
            }
        }

        for (int i = 0; i < (request.Rivals.IsDefault ? 0 : request.Rivals.Length); i++)
        {
            if (request.Rivals[i] is null || string.IsNullOrWhiteSpace(request.Rivals[i].Name) || string.IsNullOrWhiteSpace(request.Rivals[i].Smiles))
            {
                errors.Add(new FieldError($"/rivals/{i}", "A rival has a name and a SMILES."));
            }
        }

        return errors.Count == 0 ? null : Problem.Invalid("invalid-field", "A field is wrong", errors[0].Detail, [.. errors]);
    }

    private static void Positive(List<FieldError> errors, string pointer, double value)
    {
        if (!(value > 0) || !double.IsFinite(value))
        {
            errors.Add(new FieldError(pointer, "It must be above zero."));
        }
    }
}
