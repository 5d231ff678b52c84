using Microsoft.EntityFrameworkCore;
using Npgsql;
using Qc.Records.Audit;
using Xunit;

namespace Qc.Records.Tests.Schema;

[Collection(DatabaseCollection.Name)]
public class GuardTests(DatabaseFixture database)
{
    [Fact]
    public async Task A_fact_without_an_audit_entry_is_refused_at_its_commit()
    {
        (_, string application) = await database.NewDatabaseAsync();
        await using (QcDbContext context = DatabaseFixture.Context(application))
        {
            await using var transaction = await context.Database.BeginTransactionAsync();
            context.Add(Sample.Product());
            await context.SaveChangesAsync();
            await AssertViolated(() => transaction.CommitAsync());
        }

        Assert.Equal(0L, await DatabaseFixture.Execute(application, "SELECT count(*) FROM qc.products"));
    }

    [Fact]
    public async Task An_entry_of_an_earlier_transaction_of_the_same_session_does_not_cover_a_later_fact()
    {
        (_, string application) = await database.NewDatabaseAsync();
        await using QcDbContext context = DatabaseFixture.Context(application);
        await context.Database.OpenConnectionAsync();
        await using (var first = await context.Database.BeginTransactionAsync())
        {
            context.Add(Sample.Product("A-1"));
            await context.SaveWithAuditAsync([new AuditDraft("person:a", "product.created", "product", "A-1")]);
            await first.CommitAsync();
        }

        await using var second = await context.Database.BeginTransactionAsync();
        context.Add(Sample.Product("A-2"));
        await context.SaveChangesAsync();
        await AssertViolated(() => second.CommitAsync());
    }

    [Fact]
    public async Task An_entry_undone_with_a_savepoint_does_not_cover_the_fact_that_stays()
    {
        (_, string application) = await database.NewDatabaseAsync();
        await using QcDbContext context = DatabaseFixture.Context(application);
        await using var transaction = await context.Database.BeginTransactionAsync();
        context.Add(Sample.Product());
        await context.SaveChangesAsync();
        await transaction.CreateSavepointAsync("before_entry");
        await context.SaveWithAuditAsync([new AuditDraft("person:a", "product.created", "product", "A-1")]);
        await transaction.RollbackToSavepointAsync("before_entry");
        await AssertViolated(() => transaction.CommitAsync());
    }

    [Theory]
    [InlineData("")]
    [InlineData("SET session_replication_role = replica; ")]
    public async Task The_owner_cannot_pass_a_fact_off_as_audited_either(string before)
    {
        (string owner, _) = await database.NewDatabaseAsync();
        const string fact = "INSERT INTO qc.lims_keys VALUES ('k', 'n', '', '', NULL, now(), 'person:a')";
        await AssertViolated(() => DatabaseFixture.Execute(owner, before + fact));

        // An entry that claims the number of a transaction to come is stamped with its own.
        const string entry = "INSERT INTO qc.audit_rows SELECT 0, now(), '', '', '', '', '', decode(repeat('00', 32), 'hex'), (pg_current_xact_id()::text::bigint + 1)::text::xid8";
        await DatabaseFixture.Execute(owner, before + entry);
        await AssertViolated(() => DatabaseFixture.Execute(owner, before + fact));
        Assert.Equal(0L, await DatabaseFixture.Execute(owner, "SELECT count(*) FROM qc.lims_keys"));
    }

    [Fact]
    public async Task Every_record_table_but_the_evidence_itself_asks_for_an_entry()
    {
        (string owner, _) = await database.NewDatabaseAsync();
        const string unguarded =
            """
            SELECT string_agg(c.relname, ' ' ORDER BY c.relname) FROM pg_class c JOIN pg_namespace n ON n.oid = c.relnamespace
            WHERE n.nspname = 'qc' AND c.relkind = 'r' AND NOT EXISTS
              (SELECT FROM pg_trigger t WHERE t.tgrelid = c.oid AND t.tgname = 'require_audit' AND t.tgdeferrable AND t.tgenabled = 'A')
            """;
        Assert.Equal("audit_rows merkle_nodes tree_heads", await DatabaseFixture.Execute(owner, unguarded));
    }

    [Fact]
    public async Task An_audit_entry_without_predecessor_is_refused()
    {
        (string owner, _) = await database.NewDatabaseAsync();
        const string entry = "INSERT INTO qc.audit_rows VALUES ({0}, now(), '', '', '', '', '', decode(repeat('00', 32), 'hex'), '7')";
        await DatabaseFixture.Execute(owner, string.Format(null, entry, 0));
        await AssertViolated(() => DatabaseFixture.Execute(owner, string.Format(null, entry, 2)));
    }

    private static async Task AssertViolated(Func<Task> action)
    {
        PostgresException refused = await Assert.ThrowsAsync<PostgresException>(action);
        Assert.Equal(PostgresErrorCodes.IntegrityConstraintViolation, refused.SqlState);
    }
}
