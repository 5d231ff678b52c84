namespace Qc.Records.Reviews;

/// <summary>What happened to a certificate after it was issued. The certificate itself never changes.</summary>
public sealed class CertificateEvent
{
    /// <summary>It must no longer be relied on.</summary>
    public const string Withdrawn = "withdrawn";

    /// <summary>Identifier.</summary>
    public required string Id { get; init; }

    /// <summary>Number of the certificate.</summary>
    public required string CertificateNumber { get; init; }

    /// <summary><see cref="Withdrawn"/>.</summary>
    public required string Kind { get; init; }

    /// <summary>Why.</summary>
    public required string Reason { get; init; }

    /// <summary>When.</summary>
    public required DateTimeOffset At { get; init; }

    /// <summary>By whom.</summary>
    public required string By { get; init; }

    /// <summary>The signature.</summary>
    public required string SignatureId { get; init; }
}
