using Microsoft.AspNetCore.Identity;
using Microsoft.AspNetCore.Identity.EntityFrameworkCore;
using Microsoft.EntityFrameworkCore;
using Qc.Evidence;
using Qc.Records.Audit;
using Qc.Records.Lots;
using Qc.Records.People;
using Qc.Records.Products;
using Qc.Records.Reviews;

namespace Qc.Records;

/// <summary>The store of record. Tables and constraints are in Schema/*.sql; this maps them.</summary>
public sealed class QcDbContext(DbContextOptions<QcDbContext> options) : IdentityDbContext<Person, IdentityRole, string>(options)
{
    private readonly List<(Guid Transaction, RecordReference Record)> _written = [];

    /// <summary>Products.</summary>
    public DbSet<Product> Products => Set<Product>();

    /// <summary>Specification versions.</summary>
    public DbSet<SpecificationVersion> SpecificationVersions => Set<SpecificationVersion>();

    /// <summary>Approvals and retirements.</summary>
    public DbSet<SpecificationEvent> SpecificationEvents => Set<SpecificationEvent>();

    /// <summary>Reference lots of products.</summary>
    public DbSet<ProductReference> ProductReferences => Set<ProductReference>();

    /// <summary>Their releases and withdrawals.</summary>
    public DbSet<ProductReferenceEvent> ProductReferenceEvents => Set<ProductReferenceEvent>();

    /// <summary>Lots.</summary>
    public DbSet<Lot> Lots => Set<Lot>();

    /// <summary>Spectra as received.</summary>
    public DbSet<LotSpectrum> LotSpectra => Set<LotSpectrum>();

    /// <summary>States of lots.</summary>
    public DbSet<LotEvent> LotEvents => Set<LotEvent>();

    /// <summary>Checks.</summary>
    public DbSet<Computation> Computations => Set<Computation>();

    /// <summary>Curves of checks.</summary>
    public DbSet<Trace> Traces => Set<Trace>();

    /// <summary>Decisions.</summary>
    public DbSet<Review> Reviews => Set<Review>();

    /// <summary>Electronic signatures.</summary>
    public DbSet<Signature> Signatures => Set<Signature>();

    /// <summary>Certificates.</summary>
    public DbSet<Certificate> Certificates => Set<Certificate>();

    /// <summary>Withdrawals of certificates.</summary>
    public DbSet<CertificateEvent> CertificateEvents => Set<CertificateEvent>();

    /// <summary>Keys of repeated submissions.</summary>
    public DbSet<IdempotencyRecord> IdempotencyRecords => Set<IdempotencyRecord>();

    /// <summary>LIMS keys.</summary>
    public DbSet<LimsKey> LimsKeys => Set<LimsKey>();

    /// <summary>Their revocations.</summary>
    public DbSet<LimsKeyRevocation> LimsKeyRevocations => Set<LimsKeyRevocation>();

    /// <summary>The audit log.</summary>
    public DbSet<AuditRow> AuditRows => Set<AuditRow>();

    /// <summary>Its Merkle tree.</summary>
    public DbSet<MerkleNode> MerkleNodes => Set<MerkleNode>();

    /// <summary>Signed heads.</summary>
    public DbSet<TreeHeadRow> TreeHeads => Set<TreeHeadRow>();

    /// <summary>Options for a connection string, with the naming that the schema uses.</summary>
    public static void Configure(DbContextOptionsBuilder builder, string connectionString) =>
        builder.UseNpgsql(connectionString).UseSnakeCaseNamingConvention();

    /// <inheritdoc/>
    public override async Task<int> SaveChangesAsync(bool acceptAllChangesOnSuccess, CancellationToken cancellationToken = default)
    {
        object[] added = [.. ChangeTracker.Entries().Where(e => e.State == EntityState.Added && RecordHash.IsRecord(e.Metadata)).Select(e => e.Entity)];
        int count = await base.SaveChangesAsync(acceptAllChangesOnSuccess, cancellationToken);
        Guid transaction = Database.CurrentTransaction?.TransactionId ?? Guid.Empty;
        _written.AddRange(added.Select(row => (transaction, RecordHash.Of(Model.FindEntityType(row.GetType())!, row))));
        return count;
    }

    /// <summary>Hashes of the rows that the open transaction wrote since this was last asked.</summary>
    internal IReadOnlyList<RecordReference> TakeWritten()
    {
        Guid transaction = Database.CurrentTransaction!.TransactionId;
        RecordReference[] taken = [.. _written.Where(w => w.Transaction == transaction).Select(w => w.Record)];
        _written.Clear();
        return taken;
    }

    /// <inheritdoc/>
    protected override void OnModelCreating(ModelBuilder builder)
    {
        base.OnModelCreating(builder);
        builder.HasDefaultSchema("qc");
        builder.Entity<Person>().ToTable("people", "people");
        builder.Entity<IdentityRole>().ToTable("roles", "people");
        builder.Entity<IdentityUserRole<string>>().ToTable("person_roles", "people");
        builder.Entity<IdentityUserClaim<string>>().ToTable("person_claims", "people");
        builder.Entity<IdentityRoleClaim<string>>().ToTable("role_claims", "people");
        builder.Entity<IdentityUserLogin<string>>().ToTable("person_logins", "people");
        builder.Entity<IdentityUserToken<string>>().ToTable("person_tokens", "people");
        builder.Entity<LotSpectrum>().HasKey(s => new { s.LotId, s.Number });
        builder.Entity<LotEvent>().Property(e => e.Id).UseIdentityAlwaysColumn();
        builder.Entity<Trace>().HasKey(t => new { t.ComputationId, t.SpectrumNumber });
        builder.Entity<Certificate>().HasKey(c => c.Number);
        builder.Entity<IdempotencyRecord>().HasKey(r => new { r.Principal, r.Key });
        builder.Entity<LimsKeyRevocation>().HasKey(r => r.KeyId);
        builder.Entity<AuditRow>().HasKey(r => r.Index);
        builder.Entity<AuditRow>().Property(r => r.Index).ValueGeneratedNever();
        builder.Entity<AuditRow>().Property(r => r.TransactionId).HasColumnType("xid8").ValueGeneratedOnAdd();
        builder.Entity<MerkleNode>().HasKey(n => new { n.Level, n.Index });
        // References without navigations: EF Core then inserts in their order.
        builder.Entity<SpecificationVersion>().HasOne<Product>().WithMany().HasForeignKey(s => s.ProductId);
        builder.Entity<SpecificationEvent>().HasOne<SpecificationVersion>().WithMany().HasForeignKey(e => e.SpecificationId);
        builder.Entity<SpecificationEvent>().HasOne<Signature>().WithMany().HasForeignKey(e => e.SignatureId);
        builder.Entity<ProductReference>().HasOne<Product>().WithMany().HasForeignKey(r => r.ProductId);
        builder.Entity<ProductReference>().HasOne<Lot>().WithMany().HasForeignKey(r => r.LotId);
        builder.Entity<ProductReference>().HasOne<Computation>().WithMany().HasForeignKey(r => r.ComputationId);
        builder.Entity<ProductReferenceEvent>().HasOne<ProductReference>().WithMany().HasForeignKey(e => e.ReferenceId);
        builder.Entity<ProductReferenceEvent>().HasOne<Signature>().WithMany().HasForeignKey(e => e.SignatureId);
        builder.Entity<Lot>().HasOne<Product>().WithMany().HasForeignKey(l => l.ProductId);
        builder.Entity<Lot>().HasOne<SpecificationVersion>().WithMany().HasForeignKey(l => l.SpecificationId);
        builder.Entity<LotSpectrum>().HasOne<Lot>().WithMany().HasForeignKey(s => s.LotId);
        builder.Entity<LotEvent>().HasOne<Lot>().WithMany().HasForeignKey(e => e.LotId);
        builder.Entity<Computation>().HasOne<Lot>().WithMany().HasForeignKey(c => c.LotId);
        builder.Entity<Trace>().HasOne<Computation>().WithMany().HasForeignKey(t => t.ComputationId);
        builder.Entity<Review>().HasOne<Lot>().WithMany().HasForeignKey(r => r.LotId);
        builder.Entity<Review>().HasOne<Computation>().WithMany().HasForeignKey(r => r.ComputationId);
        builder.Entity<Review>().HasOne<Signature>().WithMany().HasForeignKey(r => r.SignatureId);
        builder.Entity<Certificate>().HasOne<Lot>().WithMany().HasForeignKey(c => c.LotId);
        builder.Entity<Certificate>().HasOne<Certificate>().WithMany().HasForeignKey(c => c.SupersedesNumber);
        builder.Entity<CertificateEvent>().HasOne<Certificate>().WithMany().HasForeignKey(e => e.CertificateNumber);
        builder.Entity<CertificateEvent>().HasOne<Signature>().WithMany().HasForeignKey(e => e.SignatureId);
        builder.Entity<IdempotencyRecord>().HasOne<Lot>().WithMany().HasForeignKey(r => r.LotId);
        builder.Entity<LimsKeyRevocation>().HasOne<LimsKey>().WithOne().HasForeignKey<LimsKeyRevocation>(r => r.KeyId);
        builder.Entity<TreeHeadRow>().ToTable("tree_heads").HasKey(h => new { h.Size, h.At });
    }
}
