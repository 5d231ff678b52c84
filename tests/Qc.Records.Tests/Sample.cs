using Qc.Records.Audit;
using Qc.Records.Lots;
using Qc.Records.People;
using Qc.Records.Products;
using Qc.Records.Reviews;

namespace Qc.Records.Tests;

/// <summary>Invented records, one of each kind.</summary>
internal static class Sample
{
    public static readonly DateTimeOffset At = new(2026, 3, 1, 8, 0, 0, TimeSpan.Zero);

    public static Product Product(string code = "A-1") => new()
    {
        Id = Ids.New(At), Code = code, Name = "ethyl acetate", Smiles = "CCOC(C)=O", Inchi = "InChI=1S/x", InchiKey = "KEY", Formula = "C4H8O2",
        MolarMassGramPerMol = 88.106, MolarMassStandardUncertaintyGramPerMol = 0.002, MolBlock = "", Solvent = "CDCl3", Nucleus = "1H",
        ExpectationJson = "{}", CreatedAt = At, CreatedBy = "person:owner",
    };

    public static Certificate Certificate(string lotId, CertificateNumber number, int version = 1) => new()
    {
        Number = number.ToString(), Year = number.Year, Serial = number.Serial, LotId = lotId, Version = version, Json = "{}", Pdf = [1], PdfSha256 = "", IssuedAt = At,
    };

    /// <summary>Returns the lot's identifier.</summary>
    public static async Task<string> FillEveryTableAsync(string owner)
    {
        await using QcDbContext context = DatabaseFixture.Context(owner);
        await using var transaction = await context.Database.BeginTransactionAsync();
        Product product = Product();
        var specification = new SpecificationVersion
        {
            Id = Ids.New(At), ProductId = product.Id, Version = 1, PostedJson = "{}", CriteriaJson = "{}", RivalsJson = "[]", DraftedAt = At, DraftedBy = "person:owner",
        };
        var signature = new Signature
        {
            Id = Ids.New(At), SubjectType = "lot", SubjectId = "x", ContentSha256 = "", StatementJson = "{}", Meaning = "reviewed", PersonUser = "r", PrintedName = "R. Reviewer", At = At,
        };
        var lot = new Lot
        {
            Id = Ids.New(At), ProductId = product.Id, SpecificationId = specification.Id, LotNumber = "26-1", Sequence = 1, SubmittedAt = At, SubmittedBy = "key:1",
        };
        var computation = new Computation
        {
            Id = Ids.New(At), LotId = lot.Id, Number = 1, EngineVersion = "0", Verdict = "pass", Unreadable = false, Unsuitable = false, Summary = "",
            ReportJson = "{}", ReportSha256 = "", RequestSha256 = "", DurationMilliseconds = 1, At = At,
        };
        var reference = new ProductReference
        {
            Id = Ids.New(At), ProductId = product.Id, Number = 1, LotId = lot.Id, ComputationId = computation.Id, ConstantsJson = "{}", ProposedAt = At, ProposedBy = "person:owner",
        };
        var key = new LimsKey { Id = Ids.New(At), Name = "LIMS", SecretSha256 = "", Scopes = "lots:write", CreatedAt = At, CreatedBy = "person:admin" };
        context.AddRange(
            product,
            specification,
            new SpecificationEvent { Id = Ids.New(At), SpecificationId = specification.Id, Kind = SpecificationEvent.Approved, EffectiveFrom = At, At = At, By = "person:qu" },
            signature,
            lot,
            new LotSpectrum { LotId = lot.Id, Number = 1, Name = "proton", Format = "jcamp-dx", Sha256 = "", Bytes = [1] },
            new LotEvent { LotId = lot.Id, State = LotState.Queued, At = At, By = "service" },
            new IdempotencyRecord { Principal = "key:1", Key = "k", BodySha256 = "", LotId = lot.Id, At = At },
            computation,
            new Trace { ComputationId = computation.Id, SpectrumNumber = 1, FirstPpm = 10, PpmPerPoint = -1, Count = 0, Measured = [], Modelled = [] },
            new Review { Id = Ids.New(At), LotId = lot.Id, Number = 1, ComputationId = computation.Id, Decision = "release", Reason = "in order", FindingsJson = "[]", At = At, By = "person:r", SignatureId = signature.Id },
            Certificate(lot.Id, new CertificateNumber(2001, 1)),
            new CertificateEvent { Id = Ids.New(At), CertificateNumber = "QC-2001-000001", Kind = CertificateEvent.Withdrawn, Reason = "wrong label", At = At, By = "person:qu", SignatureId = signature.Id },
            reference,
            new ProductReferenceEvent { Id = Ids.New(At), ReferenceId = reference.Id, Kind = ProductReferenceEvent.Released, At = At, By = "person:qu", SignatureId = signature.Id },
            key,
            new LimsKeyRevocation { KeyId = key.Id, At = At, By = "person:admin" },
            new TreeHeadRow { Size = 1, At = At, RootHash = new byte[32], SignedText = "", Signature = "" });
        await context.SaveWithAuditAsync([new AuditDraft("person:owner", "product.created", "product", product.Id)]);
        await transaction.CommitAsync();
        return lot.Id;
    }
}
