using Microsoft.EntityFrameworkCore;
using Qc.Records;
using Qc.Records.Reviews;

namespace Qc.Service.Features.Certificates;

/// <summary>Whether a certificate may be relied on, now. The certificate itself never changes.</summary>
/// <param name="State">"valid", "superseded" or "withdrawn".</param>
/// <param name="SupersededBy">Number of the certificate that took its place.</param>
/// <param name="WithdrawnAt">When it was withdrawn.</param>
/// <param name="Reason">Why it was withdrawn.</param>
public sealed record CertificateState(string State, string? SupersededBy, DateTimeOffset? WithdrawnAt, string? Reason)
{
    /// <summary>It may be relied on.</summary>
    public const string Valid = "valid";

    /// <summary>Reads the state; withdrawal outweighs that another took its place.</summary>
    public static async Task<CertificateState> OfAsync(QcDbContext context, string number, CancellationToken cancellation)
    {
        CertificateEvent? withdrawal = await context.CertificateEvents.AsNoTracking()
            .SingleOrDefaultAsync(e => e.CertificateNumber == number && e.Kind == CertificateEvent.Withdrawn, cancellation);
        string? successor = await context.Certificates.Where(c => c.SupersedesNumber == number).Select(c => c.Number).FirstOrDefaultAsync(cancellation);
        return withdrawal is not null
            ? new CertificateState(CertificateEvent.Withdrawn, successor, withdrawal.At, withdrawal.Reason)
            : new CertificateState(successor is null ? Valid : "superseded", successor, null, null);
    }
}
