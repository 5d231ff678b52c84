using System.Globalization;
using Microsoft.EntityFrameworkCore;
using Qc.Records.Audit;

namespace Qc.Records.Reviews;

/// <summary>A place in a year's series of certificates.</summary>
/// <param name="Year">Year, UTC.</param>
/// <param name="Serial">Serial in the year, from 1.</param>
public readonly record struct CertificateNumber(int Year, int Serial)
{
    /// <summary>As printed, e.g. "QC-2026-000001".</summary>
    public override string ToString() => string.Create(CultureInfo.InvariantCulture, $"QC-{Year:0000}-{Serial:000000}");
}

/// <summary>
/// Numbers of certificates: one series a year, without gaps. A number is taken by the transaction that issues the
/// certificate; where that is rolled back, the next one takes the same number. The database refuses a gap besides.
/// </summary>
public static class CertificateSeries
{
    private const long LockKey = 0x5143_4345; // "QCCE"

    /// <summary>The next number at the database's time. Other issuers wait from here to the end of the transaction.</summary>
    /// <exception cref="InvalidOperationException">No transaction is open.</exception>
    public static async Task<CertificateNumber> NextCertificateNumberAsync(this QcDbContext context, CancellationToken cancellation = default)
    {
        if (context.Database.CurrentTransaction is null)
        {
            throw new InvalidOperationException("A certificate number is taken in the transaction that issues the certificate; begin it before.");
        }

        await context.Database.ExecuteSqlRawAsync($"SELECT pg_advisory_xact_lock({LockKey})", cancellation);
        int year = (await context.DatabaseTimeAsync(cancellation)).UtcDateTime.Year;
        int last = await context.Certificates.Where(c => c.Year == year).MaxAsync(c => (int?)c.Serial, cancellation) ?? 0;
        return new CertificateNumber(year, last + 1);
    }
}
