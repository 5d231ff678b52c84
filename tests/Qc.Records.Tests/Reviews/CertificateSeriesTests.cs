using Microsoft.EntityFrameworkCore;
using Npgsql;
using Qc.Records.Audit;
using Qc.Records.Reviews;
using Xunit;

namespace Qc.Records.Tests.Reviews;

[Collection(DatabaseCollection.Name)]
public class CertificateSeriesTests(DatabaseFixture database)
{
    private const int PastYear = 2001;
    private int _version = 1;

    [Fact]
    public async Task Concurrent_issuers_some_of_whom_fail_leave_no_gap()
    {
        (string owner, string application) = await database.NewDatabaseAsync();
        string lot = await Sample.FillEveryTableAsync(owner);
        await Task.WhenAll(Enumerable.Range(0, 8).Select(async issuer =>
        {
            for (int i = 0; i < 4; i++)
            {
                await IssueAsync(application, lot, commits: issuer < 5);
            }
        }));
        await using QcDbContext context = DatabaseFixture.Context(application);
        int[] serials = await context.Certificates.Where(c => c.Year != PastYear).OrderBy(c => c.Serial).Select(c => c.Serial).ToArrayAsync();
        Assert.Equal(Enumerable.Range(1, 5 * 4), serials);
    }

    [Fact]
    public async Task A_certificate_that_would_leave_a_gap_is_refused_by_the_database()
    {
        (string owner, _) = await database.NewDatabaseAsync();
        string lot = await Sample.FillEveryTableAsync(owner);
        await using QcDbContext context = DatabaseFixture.Context(owner);
        await using var transaction = await context.Database.BeginTransactionAsync();
        context.Add(Sample.Certificate(lot, new CertificateNumber(PastYear, 3), version: 2));
        DbUpdateException refused = await Assert.ThrowsAsync<DbUpdateException>(() => context.SaveChangesAsync());
        Assert.Equal(PostgresErrorCodes.IntegrityConstraintViolation, Assert.IsType<PostgresException>(refused.InnerException).SqlState);
    }

    [Fact]
    public async Task A_number_cannot_be_taken_outside_a_transaction()
    {
        (_, string application) = await database.NewDatabaseAsync();
        await using QcDbContext context = DatabaseFixture.Context(application);
        await Assert.ThrowsAsync<InvalidOperationException>(() => context.NextCertificateNumberAsync());
    }

    private async Task IssueAsync(string connection, string lot, bool commits)
    {
        await using QcDbContext context = DatabaseFixture.Context(connection);
        await using var transaction = await context.Database.BeginTransactionAsync();
        CertificateNumber number = await context.NextCertificateNumberAsync();
        context.Add(Sample.Certificate(lot, number, Interlocked.Increment(ref _version)));
        await context.SaveWithAuditAsync([new AuditDraft("service", "certificate.issued", "lot", lot)]);
        if (commits)
        {
            await transaction.CommitAsync();
        }
    }
}
