using System.Collections.Immutable;
using Qc.Engine.Fitting;
using Qc.Engine.Prediction;
using Qc.Engine.Processing;
using Qc.Engine.Quantities;
using Qc.Engine.Reading;
using Qc.Engine.Structures;
using Qc.Engine.Values;
using Qc.Engine.Verdicts.Rules;

namespace Qc.Engine.Verdicts;

/// <summary>What came of one spectrum.</summary>
internal sealed record SpectrumJudgement(
    JudgedSpectrum Judged,
    ImmutableArray<Finding> Findings,
    ImmutableArray<LeftOver> LeftOver,
    ImmutableArray<OtherSubstance> Others,
    ImmutableArray<Quantity> Quantities,
    ImmutableArray<RivalResult> Rivals);

/// <summary>Processes, fits and judges one spectrum.</summary>
internal static class SpectrumJudge
{
    public static SpectrumJudgement Judge(
        CheckRequest request, string name, Measurement measurement, Expectation expectation, CancellationToken cancellation)
    {
        ProcessingOutcome processing = SpectrumProcessor.Process(measurement, new ProcessingOptions { PrescribedSolvent = request.Solvent });
        string solvent = processing.Spectrum.RecognisedSolvent ?? request.Solvent;
        expectation = request.Reference?.Apply(expectation, solvent, processing.Spectrum.AxisCorrectionPpm is not null) ?? expectation;
        FitInput input = Input(request, processing.Spectrum, expectation, solvent);
        FitResult fit = SpectrumFit.Run(input, cancellation);
        var judged = new JudgedSpectrum { Name = name, Request = request, Processing = processing, Expectation = expectation, Fit = fit };
        ImmutableArray<LeftOver> leftOver = LeftOvers(judged, input);
        ImmutableArray<Finding> suitability =
        [
            .. SolventRule.Judge(judged),
            .. AxisOffsetRule.Judge(judged),
            .. SignalToNoiseRule.Judge(judged),
            .. LineWidthRule.Judge(judged),
            .. DigitalResolutionRule.Judge(judged),
            .. PhaseRule.Judge(judged),
        ];
        ImmutableArray<Finding> identity =
        [
            .. SubstanceRule.Judge(judged, leftOver.Sum(l => l.MolPercent)),
            .. PresenceRule.Judge(judged),
            .. ShiftRule.Judge(judged),
            .. CountRule.Judge(judged),
            .. PatternRule.Judge(judged),
            .. CouplingRule.Judge(judged),
            .. UnaccountedRule.Judge(judged, leftOver),
        ];

        // Rivals ask whether something else would have passed as well; of a lot that is flagged already they change nothing.
        bool passesSoFar = suitability.Concat(identity).All(finding => finding.Outcome == Outcome.Pass);
        RivalTest rivals = RivalTest.Run(request, input, fit, passesSoFar, cancellation);
        (Quantity Quantity, Uncertain MassFraction)? assay = Amounts.Assay(judged);
        ImmutableArray<Quantity> quantities = assay is { } a ? [a.Quantity, .. Amounts.Of(judged)] : [.. Amounts.Of(judged)];
        ImmutableArray<Finding> findings =
        [
            .. suitability,
            .. identity,
            .. ImpurityRule.Judge(judged),
            .. RivalRule.Judge(request.Criteria, request.ProductName, rivals),
            .. AssayRule.Judge(judged, assay),
        ];
        return new SpectrumJudgement(judged, findings, leftOver, Others(judged), quantities, rivals.Results);
    }

    /// <summary>Curves for drawing.</summary>
    public static Traces Traces(JudgedSpectrum judged)
    {
        Spectrum spectrum = judged.Spectrum;
        var measured = new float[spectrum.Count];
        var modelled = new float[spectrum.Count];
        var leftOver = new float[spectrum.Count];
        for (int i = 0; i < spectrum.Count; i++)
        {
            measured[i] = (float)spectrum.Intensity[i];
            modelled[i] = (float)judged.Fit.Modelled[i];
            leftOver[i] = (float)(spectrum.Intensity[i] - judged.Fit.Modelled[i]);
        }

        return new Traces(spectrum.FirstPpm, spectrum.PpmPerPoint, measured, modelled, leftOver);
    }

    private static FitInput Input(CheckRequest request, Spectrum spectrum, Expectation expectation, string solvent)
    {
        InternalStandard? standard = request.Sample?.InternalStandard;
        return new FitInput
        {
            Spectrum = spectrum,
            Product = expectation,
            InternalStandard = standard is null ? null : Expect(standard.Substance.Structure, solvent),
            InternalStandardName = standard?.Substance.Name ?? "",
            Known = KnownSubstances.In(solvent),
        };
    }

    /// <summary>The expectation of a structure in a solvent.</summary>
    public static Expectation Expect(Molecule structure, string solvent) =>
        Predictor.Predict(structure, Topicity.Groups(structure), solvent);

    private static ImmutableArray<LeftOver> LeftOvers(JudgedSpectrum judged, FitInput input)
    {
        double perProton = judged.Fit.AreaPerProton;
        double protons = judged.ExpectedProtons;
        if (perProton <= 0 || protons <= 0)
        {
            return
            [
                .. judged.Fit.LeftOver.Select(l =>
                    new LeftOver(l.Ppm.Low, l.Ppm.High, 0, 100, ImpuritySearch.Candidates(input, l.Ppm))),
            ];
        }

        return
        [
            .. judged.Fit.LeftOver
                .Select(l => new LeftOver(
                    l.Ppm.Low, l.Ppm.High, l.Area / perProton, 100 * l.Area / perProton / protons, ImpuritySearch.Candidates(input, l.Ppm)))
                .Where(l => l.MolPercent >= 0.1),
        ];
    }

    private static ImmutableArray<OtherSubstance> Others(JudgedSpectrum judged)
    {
        double perProton = judged.Fit.AreaPerProton;
        return
        [
            .. judged.Fit.Others.Select(o => new OtherSubstance(
                o.Name,
                o.Role,
                o.RegionsPpm,
                perProton > 0 ? o.Area / perProton : 0,
                o.Role is "impurity" or "internal standard" && perProton > 0 && o.Protons > 0 ? 100 * o.Area / o.Protons / perProton : null)),
        ];
    }
}
