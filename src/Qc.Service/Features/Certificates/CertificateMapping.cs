using System.Globalization;
using System.Text.Json;
using System.Text.Json.Nodes;
using Qc.Certificates;
using Qc.Engine.Verdicts;
using Qc.Evidence;
using Qc.Service.Features.Audit;
using Qc.Service.Features.Lots;
using Qc.Service.Hosting;

namespace Qc.Service.Features.Certificates;

/// <summary>From records to what a certificate prints and carries: every number comes from the stored report.</summary>
internal static class CertificateMapping
{
    public static string Json(
        Facts facts, string number, int version, string? supersedes, DateTimeOffset issuedAt, SignedHead head, QcOptions options) => new JsonObject
    {
        ["number"] = number,
        ["version"] = version,
        ["supersedes"] = supersedes,
        ["issuedAt"] = issuedAt.UtcDateTime.ToString("yyyy-MM-ddTHH:mm:ss.ffffffZ", CultureInfo.InvariantCulture),
        ["laboratory"] = options.Site,
        ["product"] = new JsonObject
        {
            ["code"] = facts.Product.Code,
            ["name"] = facts.Product.Name,
            ["smiles"] = facts.Product.Smiles,
            ["inchiKey"] = facts.Product.InchiKey,
            ["formula"] = facts.Product.Formula,
            ["molarMassGramPerMol"] = facts.Product.MolarMassGramPerMol,
        },
        ["lot"] = new JsonObject
        {
            ["id"] = facts.Lot.Id,
            ["lot"] = facts.Lot.LotNumber,
            ["sequence"] = facts.Lot.Sequence,
            ["submittedBy"] = facts.Lot.SubmittedBy,
            ["specificationVersion"] = facts.Specification.Version,
            ["spectra"] = new JsonArray([.. facts.Spectra.Select(s => (JsonNode)new JsonObject { ["name"] = s.Name, ["sha256"] = s.Sha256 })]),
        },
        ["verdict"] = facts.Computation.Verdict,
        ["reportSha256"] = facts.Computation.ReportSha256,
        ["report"] = JsonNode.Parse(facts.Computation.ReportJson),
        ["signatures"] = new JsonArray([.. facts.Reviews.Select(r => JsonNode.Parse(r.Signature.StatementJson))]),
        ["auditHead"] = new JsonObject { ["text"] = head.Text, ["signature"] = head.Signature },
        ["cautions"] = new JsonArray([.. CertificateRenderer.StandingCautions.Select(c => (JsonNode)c)]),
    }.ToJsonString(new JsonSerializerOptions { WriteIndented = true });

    public static CertificateContent Content(
        Facts facts, string number, int version, string? supersedes, DateTimeOffset issuedAt, SignedHead head, QcOptions options, string json)
    {
        CheckReport report = facts.Report;
        return new CertificateContent
        {
            Number = number,
            Version = version,
            SupersedesNumber = supersedes,
            IssuedAt = issuedAt,
            Laboratory = options.Site,
            Product = new CertifiedProduct(
                facts.Product.Code, facts.Product.Name, facts.Product.Smiles, facts.Product.InchiKey, facts.Product.Formula, facts.Product.MolarMassGramPerMol),
            Lot = new CertifiedLot(
                facts.Lot.Id,
                facts.Lot.Sequence == 1 ? facts.Lot.LotNumber : $"{facts.Lot.LotNumber} (measurement {facts.Lot.Sequence})",
                facts.Lot.SampledAt,
                facts.Lot.SubmittedAt,
                facts.Lot.Instrument,
                report.Spectra.Select(s => s.FrequencyMHz).FirstOrDefault(f => f is not null),
                report.Spectra.Select(s => s.RecognisedSolvent).FirstOrDefault(s => s is not null) ?? facts.Product.Solvent),
            Specification = $"version {facts.Specification.Version}, approved by {facts.Approval.By["person:".Length..]} on {facts.Approval.At.UtcDateTime.ToString("yyyy-MM-dd", CultureInfo.InvariantCulture)}",
            Verdict = facts.Computation.Verdict ?? "",
            Summary = report.Summary,
            ReportSha256 = facts.Computation.ReportSha256,
            Findings = [.. report.Findings.Select(Finding)],
            Protons = [.. report.Protons.Select(Proton)],
            Quantities = [.. report.Quantities.Select(q => new QuantityRow(q.Name, $"{Number(q.Value, 3)} {q.Unit}", $"± {Number(q.ExpandedUncertainty, 3)} (k = {Number(q.CoverageFactor, 0)})"))],
            OtherSubstances = [.. report.Others.Select(o => new SubstanceRow(o.Name, o.Role, o.MolPercent is { } mol ? $"{Number(mol, 2)} mol % of the product" : $"{Number(o.Protons, 2)} H"))],
            Reviews = [.. facts.Reviews.Select(r => new ReviewRow(r.Review.Decision, r.Signature.PrintedName, r.Review.At, r.Review.Reason))],
            Signatures = [.. facts.Reviews.Select(r => new SignatureRow(r.Signature.PrintedName, r.Signature.At, r.Signature.Meaning, StatementHash(r.Signature.StatementJson)))],
            Trace = facts.Curves(),
            AuditHead = new AuditHeadRow(head.Size, head.RootHex, head.At),
            Spectra = [.. facts.Spectra],
            ServiceVersion = typeof(CertificateMapping).Assembly.GetName().Version?.ToString(3) ?? "0",
            EngineVersion = report.EngineVersion,
            VerificationUrl = options.PublicUrl is { } site ? $"{site}/verify?number={number}" : null,
            MachineReadableJson = json,
        };
    }

    private static string StatementHash(string statementJson) => SignatureStatement.HashOfContent(statementJson);

    private static FindingRow Finding(Finding f) => new(
        f.Criterion,
        f.Subject,
        f.Statement,
        f.Observed is { } observed ? $"{Number(observed, 3)}{(f.StandardUncertainty is { } u ? $" (u {Number(u, 3)})" : "")} {f.Unit}".TrimEnd() : "",
        Limit(f),
        f.Outcome == Outcome.Pass ? "pass" : "flag");

    private static string Limit(Finding f) => (f.Low, f.High) switch
    {
        ({ } low, { } high) => $"{Number(low, 3)} to {Number(high, 3)} {f.Unit}".TrimEnd(),
        ({ } low, null) => $"≥ {Number(low, 3)} {f.Unit}".TrimEnd(),
        (null, { } high) => $"≤ {Number(high, 3)} {f.Unit}".TrimEnd(),
        _ => "",
    };

    private static ProtonRow Proton(LedgerLine l) => new(
        l.Group,
        Number(l.ExpectedCount, 0),
        l.ObservedCount is { } count ? Number(count, 2) : "–",
        $"{Number(l.ExpectedPpm, 2)} ± {Number(l.ExpectedStandardUncertaintyPpm, 2)}",
        l.ObservedPpm is { } ppm ? Number(ppm, 3) : "–",
        l.CouplingsHz.IsEmpty ? l.Splitting : $"{l.Splitting} ({string.Join(", ", l.CouplingsHz.Select(j => Number(j, 1)))} Hz)",
        l.Remark);

    private static string Number(double value, int decimals) => value.ToString($"F{decimals}", CultureInfo.InvariantCulture);
}
