namespace Qc.Records.Reviews;

/// <summary>An electronic signature: who signed what, when and with which meaning (21 CFR 11.50, 11.70).</summary>
public sealed class Signature
{
    /// <summary>Identifier.</summary>
    public required string Id { get; init; }

    /// <summary>Kind of what was signed.</summary>
    public required string SubjectType { get; init; }

    /// <summary>Its identifier.</summary>
    public required string SubjectId { get; init; }

    /// <summary>SHA-256 of the canonical content that was signed, lower-case hex.</summary>
    public required string ContentSha256 { get; init; }

    /// <summary>The canonical statement: name, time, meaning, subject and hash together.</summary>
    public required string StatementJson { get; init; }

    /// <summary>"reviewed", "approved", "rejected" ...</summary>
    public required string Meaning { get; init; }

    /// <summary>User name.</summary>
    public required string PersonUser { get; init; }

    /// <summary>Printed name at the time.</summary>
    public required string PrintedName { get; init; }

    /// <summary>When.</summary>
    public required DateTimeOffset At { get; init; }
}

/// <summary>A person's decision on a lot.</summary>
public sealed class Review
{
    /// <summary>Identifier.</summary>
    public required string Id { get; init; }

    /// <summary>The lot.</summary>
    public required string LotId { get; init; }

    /// <summary>Number within the lot, from 1; two reviewers at once cannot both take it.</summary>
    public required int Number { get; init; }

    /// <summary>The computation decided on.</summary>
    public required string ComputationId { get; init; }

    /// <summary>"release", "reject" or "remeasure".</summary>
    public required string Decision { get; init; }

    /// <summary>Why.</summary>
    public required string Reason { get; init; }

    /// <summary>Decisions on single findings: [{ criterion, subject, accepted, comment }].</summary>
    public required string FindingsJson { get; init; }

    /// <summary>When.</summary>
    public required DateTimeOffset At { get; init; }

    /// <summary>By whom.</summary>
    public required string By { get; init; }

    /// <summary>The signature.</summary>
    public required string SignatureId { get; init; }
}

/// <summary>An issued certificate.</summary>
public sealed class Certificate
{
    /// <summary>Number, e.g. "QC-2026-000001".</summary>
    public required string Number { get; init; }

    /// <summary>Year of the series.</summary>
    public required int Year { get; init; }

    /// <summary>Serial in the year, without gaps.</summary>
    public required int Serial { get; init; }

    /// <summary>The lot.</summary>
    public required string LotId { get; init; }

    /// <summary>Version for the lot, from 1.</summary>
    public required int Version { get; init; }

    /// <summary>The certificate this one supersedes.</summary>
    public string? SupersedesNumber { get; init; }

    /// <summary>The data attached to the PDF.</summary>
    public required string Json { get; init; }

    /// <summary>The signed PDF.</summary>
    public required byte[] Pdf { get; init; }

    /// <summary>SHA-256 of the PDF, lower-case hex.</summary>
    public required string PdfSha256 { get; init; }

    /// <summary>When it was issued.</summary>
    public required DateTimeOffset IssuedAt { get; init; }
}
