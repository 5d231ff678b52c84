using System.Collections.Immutable;
using Qc.Engine.Prediction;
using Qc.Engine.Reading;

namespace Qc.Engine.Verdicts;

/// <summary>The engine's one entry: request in, report out. Pure and deterministic.</summary>
public static class LotCheck
{
    /// <summary>Version of the rules and tables; part of every report.</summary>
    public const string EngineVersion = "0.1";

    /// <summary>Judges a lot.</summary>
    /// <exception cref="OperationCanceledException">The caller gave up.</exception>
    public static CheckReport Run(CheckRequest request, CancellationToken cancellation = default)
    {
        cancellation.ThrowIfCancellationRequested();
        (SubmittedSpectrum Submitted, ReadingResult Result)[] read =
            [.. request.Spectra.Select(s => (s, MeasurementReader.Read(s.Format, s.Content)))];
        if (read.Length == 0 || read.Any(r => r.Result.Error is not null))
        {
            return Unreadable(read);
        }

        var judgements = new List<(SpectrumJudgement Judgement, Measurement Measurement)>();
        var spectra = new List<SpectrumReport>();
        Expectation expectation = SpectrumJudge.Expect(request.Product.Structure, request.Solvent);
        foreach ((SubmittedSpectrum submitted, ReadingResult result) in read)
        {
            Measurement? measurement = Chosen(result, request.Nucleus);
            if (measurement is null)
            {
                spectra.Add(NotJudged(submitted, result, request.Nucleus));
                continue;
            }

            SpectrumJudgement judgement = SpectrumJudge.Judge(request, submitted.Name, measurement, expectation, cancellation);
            judgements.Add((judgement, measurement));
            spectra.Add(Describe(submitted, measurement, judgement.Judged));
        }

        return judgements.Count == 0 ? NothingToJudge(request, spectra) : Judged(request, judgements, spectra);
    }

    /// <summary>
    /// The processed spectrum of the method's nucleus where the file holds one, since that is what the analyst saw; else
    /// the FID.
    /// </summary>
    private static Measurement? Chosen(ReadingResult result, string nucleus)
    {
        Measurement[] right = [.. result.Measurements.Where(m => m.Facts.Nucleus == nucleus)];
        return right.FirstOrDefault(m => m is SpectrumMeasurement) ?? right.FirstOrDefault();
    }

    private static CheckReport Judged(
        CheckRequest request, List<(SpectrumJudgement Judgement, Measurement Measurement)> judgements, List<SpectrumReport> spectra)
    {
        SpectrumJudgement first = judgements[0].Judgement;
        ImmutableArray<Finding> findings = [.. judgements.SelectMany(j => j.Judgement.Findings)];
        bool flagged = findings.Any(f => f.Outcome == Outcome.Flag);
        bool unsuitable = findings.Any(f => f.Outcome == Outcome.Flag && f.Criterion.StartsWith("suitability.", StringComparison.Ordinal));
        return new CheckReport
        {
            EngineVersion = EngineVersion,
            Unsuitable = unsuitable,
            Verdict = flagged ? Outcome.Flag : Outcome.Pass,
            Summary = Summary.Of(request.ProductName, findings, unsuitable),
            Findings = findings,
            Protons = Ledger.Of(first.Judged),
            LeftOver = first.LeftOver,
            Others = first.Others,
            Quantities = first.Quantities,
            Rivals = first.Rivals,
            Reference = first.Judged.HasReference ? request.Reference?.Name : null,
            Constants = FittedConstants.Of(first.Judged),
            Spectra = [.. spectra],
        };
    }

    private static SpectrumReport Describe(SubmittedSpectrum submitted, Measurement measurement, JudgedSpectrum judged) => new()
    {
        Name = submitted.Name,
        Warnings = measurement.Warnings,
        Steps = judged.Spectrum.Steps,
        FrequencyMHz = judged.Spectrum.FrequencyMHz,
        RecognisedSolvent = judged.Spectrum.RecognisedSolvent,
        Traces = SpectrumJudge.Traces(judged),
    };

    private static SpectrumReport NotJudged(SubmittedSpectrum submitted, ReadingResult result, string nucleus)
    {
        string found = string.Join(", ", result.Measurements.Select(m => m.Facts.Nucleus).Distinct());
        return new SpectrumReport
        {
            Name = submitted.Name,
            Warnings = [new ReadingWarning("OBSERVENUCLEUS", 0, $"Not judged: the file holds {found}, the method asks for {nucleus}.")],
        };
    }

    private static CheckReport NothingToJudge(CheckRequest request, List<SpectrumReport> spectra) => new()
    {
        EngineVersion = EngineVersion,
        Unreadable = true,
        Summary = $"No spectrum of {request.Nucleus} was submitted; there is nothing to judge.",
        Findings =
        [
            new Finding(
                "reading.nucleus",
                "spectra",
                $"No spectrum of {request.Nucleus} was submitted; there is nothing to judge.",
                Outcome.Flag),
        ],
        Spectra = [.. spectra],
    };

    private static CheckReport Unreadable((SubmittedSpectrum Submitted, ReadingResult Result)[] read)
    {
        (SubmittedSpectrum Submitted, ReadingResult Result)[] broken = [.. read.Where(r => r.Result.Error is not null)];
        ImmutableArray<Finding> findings =
        [
            .. broken.Select(b => new Finding("reading.file", b.Submitted.Name, b.Result.Error!.Message, Outcome.Flag)),
        ];
        return new CheckReport
        {
            EngineVersion = EngineVersion,
            Unreadable = true,
            Summary = findings.IsEmpty ? "No spectrum was submitted." : $"The spectrum \"{broken[0].Submitted.Name}\" cannot be read. {findings[0].Statement}",
            Findings = findings,
            Spectra = [.. read.Select(r => new SpectrumReport { Name = r.Submitted.Name, Error = r.Result.Error })],
        };
    }
}
