namespace Qc.Evidence;

/// <summary>
/// The right to issue one certificate for one lot. Only <see cref="ReleaseDecision.Evaluate"/> makes one, and it serves
/// once: a certificate cannot be rendered without a decision that was checked.
/// </summary>
public sealed class ReleaseToken
{
    private int used;

    internal ReleaseToken(string lotId, string reportSha256, bool byException)
    {
        ByException = byException;
        LotId = lotId;
        ReportSha256 = reportSha256;
    }

    /// <summary>The lot it is for.</summary>
    public string LotId { get; }

    /// <summary>True where the lot goes without a reviewer, as its approved specification allows.</summary>
    public bool ByException { get; }

    /// <summary>SHA-256 of the canonical report the decision rests on, lower-case hex.</summary>
    public string ReportSha256 { get; }

    /// <summary>Uses the token up.</summary>
    /// <param name="lotId">The lot of the certificate.</param>
    /// <param name="reportSha256">The report of the certificate.</param>
    /// <exception cref="InvalidOperationException">It was used before, or is for another lot or report.</exception>
    public void Use(string lotId, string reportSha256)
    {
        if (lotId != LotId || reportSha256 != ReportSha256)
        {
            throw new InvalidOperationException("The release is for another lot or another report.");
        }

        if (Interlocked.Exchange(ref used, 1) == 1)
        {
            throw new InvalidOperationException("The release was used before; each certificate needs its own.");
        }
    }
}
