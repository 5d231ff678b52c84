using System.Collections.Immutable;
using System.Text.Json;
using System.Text.Json.Serialization;
using Qc.Engine.Prediction;
using Qc.Engine.Values;
using Qc.Engine.Verdicts;
using Qc.Records.Lots;
using Qc.Records.Reviews;
using Qc.Service.Http;

namespace Qc.Service.Features.Lots;

/// <summary>A lot as answered.</summary>
public sealed record LotDto
{
    /// <summary>Identifier.</summary>
    public required string Id { get; init; }

    /// <summary>Product code.</summary>
    public required string Product { get; init; }

    /// <summary>Version of the specification it is judged by.</summary>
    public required int SpecificationVersion { get; init; }

    /// <summary>Lot number.</summary>
    public required string Lot { get; init; }

    /// <summary>Sequence of the measurement.</summary>
    public required int Sequence { get; init; }

    /// <summary>State.</summary>
    public required string State { get; init; }

    /// <summary>"pass", "flag", or null while there is none.</summary>
    public string? Verdict { get; init; }

    /// <summary>Whether the measurement asks for a re-measurement.</summary>
    public bool? Unsuitable { get; init; }

    /// <summary>Why, in a sentence or two.</summary>
    public string? Summary { get; init; }

    /// <summary>Instrument.</summary>
    public string? Instrument { get; init; }

    /// <summary>When the sample was taken.</summary>
    public DateTimeOffset? SampledAt { get; init; }

    /// <summary>When it was submitted.</summary>
    public required DateTimeOffset SubmittedAt { get; init; }

    /// <summary>By whom.</summary>
    public required string SubmittedBy { get; init; }

    /// <summary>Version of the engine.</summary>
    public string? EngineVersion { get; init; }

    /// <summary>Findings.</summary>
    public ImmutableArray<FindingDto> Findings { get; init; } = [];

    /// <summary>Proton ledger.</summary>
    public ImmutableArray<ProtonDto> Protons { get; init; } = [];

    /// <summary>Signal that nothing accounts for.</summary>
    public ImmutableArray<LeftOver> LeftOver { get; init; } = [];

    /// <summary>Other substances accounted for.</summary>
    public ImmutableArray<OtherDto> Others { get; init; } = [];

    /// <summary>Quantities.</summary>
    public ImmutableArray<Quantity> Quantities { get; init; } = [];

    /// <summary>The reference lot it was judged against; left out where it was judged by prediction.</summary>
    [JsonIgnore(Condition = JsonIgnoreCondition.WhenWritingNull)]
    public string? Reference { get; init; }

    /// <summary>Rivals.</summary>
    public ImmutableArray<RivalResult> Rivals { get; init; } = [];

    /// <summary>Spectra.</summary>
    public ImmutableArray<SpectrumDto> Spectra { get; init; } = [];

    /// <summary>Decisions.</summary>
    public ImmutableArray<ReviewDto> Reviews { get; init; } = [];

    /// <summary>What this check cannot see.</summary>
    public string Caution { get; init; } = Cautions.Short;
}

/// <summary>A finding as answered.</summary>
public sealed record FindingDto(
    string Criterion,
    string Subject,
    string Statement,
    Outcome Outcome,
    double? Observed,
    double? StandardUncertainty,
    double? Low,
    double? High,
    string Unit,
    ImmutableArray<double[]> RegionsPpm);

/// <summary>A ledger line as answered.</summary>
public sealed record ProtonDto(
    string Group,
    ImmutableArray<int> Atoms,
    double ExpectedCount,
    double? ObservedCount,
    double ExpectedPpm,
    double ExpectedStandardUncertaintyPpm,
    double? ObservedPpm,
    string Splitting,
    ImmutableArray<double> CouplingsHz,
    Basis Basis,
    bool Exchangeable,
    string Remark,
    double[]? RegionPpm);

/// <summary>Another substance as answered.</summary>
public sealed record OtherDto(string Name, string Role, ImmutableArray<double[]> RegionsPpm, double Protons, double? MolPercent);

/// <summary>A spectrum as answered.</summary>
public sealed record SpectrumDto
{
    /// <summary>Number, from 1.</summary>
    public required int Number { get; init; }

    /// <summary>Name.</summary>
    public required string Name { get; init; }

    /// <summary>Format.</summary>
    public required string Format { get; init; }

    /// <summary>SHA-256 of the bytes as received.</summary>
    public required string Sha256 { get; init; }

    /// <summary>Field.</summary>
    public double? FrequencyMHz { get; init; }

    /// <summary>Solvent that the spectrum shows.</summary>
    public string? RecognisedSolvent { get; init; }

    /// <summary>Why it could not be read.</summary>
    [JsonIgnore(Condition = JsonIgnoreCondition.WhenWritingNull)]
    public Engine.Reading.ReadingError? Error { get; init; }

    /// <summary>Departures from the format.</summary>
    public ImmutableArray<Engine.Reading.ReadingWarning> Warnings { get; init; } = [];

    /// <summary>Steps of processing.</summary>
    public ImmutableArray<Engine.Processing.ProcessingStep> Steps { get; init; } = [];
}

/// <summary>A decision as answered.</summary>
public sealed record ReviewDto(string Decision, string Reason, DateTimeOffset At, string By, string PrintedName, string Meaning, string ContentSha256);

/// <summary>A lot in a list.</summary>
public sealed record LotListItem(
    string Id, string Product, string Lot, int Sequence, string State, string? Verdict, string? Summary, DateTimeOffset SubmittedAt);

/// <summary>A page of lots.</summary>
/// <param name="Lots">Newest first.</param>
/// <param name="NextCursor">To be sent for the next page; null on the last.</param>
public sealed record LotPage(IReadOnlyList<LotListItem> Lots, string? NextCursor);

/// <summary>The cautions that go with every verdict.</summary>
public static class Cautions
{
    /// <summary>In two sentences.</summary>
    public const string Short =
        "Proton NMR does not see inorganic salts, metals, water below its detection limit or substances under another signal. "
        + "A verdict supports, and does not replace, the decision of the quality unit and of licensed persons under local rules.";
}

/// <summary>From stored records to what the API answers: one mapping.</summary>
internal static class LotMapping
{
    public static LotDto Dto(
        Lot lot, string productCode, int specificationVersion, string state, Computation? computation, IReadOnlyList<LotSpectrum> spectra, IReadOnlyList<(Review Review, Signature Signature)> reviews)
    {
        CheckReport? report = computation is null ? null : Report(computation);
        return new LotDto
        {
            Id = lot.Id,
            Product = productCode,
            SpecificationVersion = specificationVersion,
            Lot = lot.LotNumber,
            Sequence = lot.Sequence,
            State = state,
            Verdict = computation?.Verdict,
            Unsuitable = computation?.Unsuitable,
            Summary = computation?.Summary,
            Instrument = lot.Instrument,
            SampledAt = lot.SampledAt,
            SubmittedAt = lot.SubmittedAt,
            SubmittedBy = lot.SubmittedBy,
            EngineVersion = computation?.EngineVersion,
            Findings = report is null ? [] : [.. report.Findings.Select(Finding)],
            Protons = report is null ? [] : [.. report.Protons.Select(Proton)],
            LeftOver = report?.LeftOver ?? [],
            Others = report is null ? [] : [.. report.Others.Select(o => new OtherDto(o.Name, o.Role, Pairs(o.RegionsPpm), o.Protons, o.MolPercent))],
            Quantities = report?.Quantities ?? [],
            Reference = report?.Reference,
            Rivals = report?.Rivals ?? [],
            Spectra = [.. spectra.Select(s => Spectrum(s, report))],
            Reviews =
            [
                .. reviews.Select(r => new ReviewDto(
                    r.Review.Decision, r.Review.Reason, r.Review.At, r.Review.By, r.Signature.PrintedName, r.Signature.Meaning, r.Signature.ContentSha256)),
            ],
        };
    }

    public static CheckReport Report(Computation computation) => JsonSerializer.Deserialize<CheckReport>(computation.ReportJson, Json.Options)!;

    private static FindingDto Finding(Finding f) => new(
        f.Criterion, f.Subject, f.Statement, f.Outcome, f.Observed, f.StandardUncertainty, f.Low, f.High, f.Unit, Pairs(f.RegionsPpm));

    private static ProtonDto Proton(LedgerLine l) => new(
        l.Group, l.Atoms, l.ExpectedCount, l.ObservedCount, l.ExpectedPpm, l.ExpectedStandardUncertaintyPpm, l.ObservedPpm, l.Splitting,
        l.CouplingsHz, l.Basis, l.Exchangeable, l.Remark, l.RegionPpm is { } region ? [region.Low, region.High] : null);

    private static ImmutableArray<double[]> Pairs(ImmutableArray<Interval> regions) =>
        regions.IsDefault ? [] : [.. regions.Select(r => new[] { r.Low, r.High })];

    private static SpectrumDto Spectrum(LotSpectrum stored, CheckReport? report)
    {
        SpectrumReport? judged = report is not null && stored.Number <= report.Spectra.Length ? report.Spectra[stored.Number - 1] : null;
        return new SpectrumDto
        {
            Number = stored.Number,
            Name = stored.Name,
            Format = stored.Format,
            Sha256 = stored.Sha256,
            FrequencyMHz = judged?.FrequencyMHz,
            RecognisedSolvent = judged?.RecognisedSolvent,
            Error = judged?.Error,
            Warnings = judged?.Warnings ?? [],
            Steps = judged?.Steps ?? [],
        };
    }
}
