using System.Collections.Immutable;
using System.Text.Json;
using System.Text.Json.Nodes;
using Microsoft.EntityFrameworkCore;
using Npgsql;
using Qc.Chemistry;
using Qc.Engine.Verdicts;
using Qc.Records;
using Qc.Records.Audit;
using Qc.Records.Products;
using Qc.Service.Features.Products;
using Qc.Service.Http;

namespace Qc.Service.Features.Specifications;

/// <summary>Drafts a version of a product's specification.</summary>
public sealed class DraftSpecification(QcDbContext context, IStructureReader structures)
{
    /// <summary>Adds the draft with the next version number.</summary>
    public async Task<Outcome<SpecificationDto>> RunAsync(string code, SpecificationRequest request, string actor, CancellationToken cancellation)
    {
        Product? product = await context.Products.AsNoTracking().SingleOrDefaultAsync(p => p.Code == code, cancellation);
        if (product is null)
        {
            return Problem.NotFound("product");
        }

        if (CriteriaCheck.Of(request) is { } problem)
        {
            return problem;
        }

        var rivals = ImmutableArray.CreateBuilder<NamedRival>();
        for (int i = 0; i < request.Rivals.Length; i++)
        {
            StructureResult read = structures.ReadSmiles(request.Rivals[i].Smiles);
            if (read.Structure is null)
            {
                return CreateProduct.StructureProblem(read.Error!, $"/rivals/{i}/smiles");
            }

            if (read.Structure.Smiles == product.Smiles)
            {
                return Problem.InvalidField($"/rivals/{i}/smiles", "This is the product itself.");
            }

            rivals.Add(request.Rivals[i] with { Smiles = read.Structure.Smiles });
        }

        var criteria = new Criteria
        {
            Identity = request.Identity,
            Suitability = request.Suitability,
            Assay = request.Assay,
            ReleaseByException = request.ReleaseByException,
        };
        await using var transaction = await context.Database.BeginTransactionAsync(cancellation);
        DateTimeOffset now = await context.DatabaseTimeAsync(cancellation);
        int version = 1 + (await context.SpecificationVersions.Where(s => s.ProductId == product.Id).MaxAsync(s => (int?)s.Version, cancellation) ?? 0);
        var draft = new SpecificationVersion
        {
            Id = Ids.New(now),
            ProductId = product.Id,
            Version = version,
            PostedJson = JsonSerializer.Serialize(request, Json.Options),
            CriteriaJson = JsonSerializer.Serialize(criteria, Json.Options),
            RivalsJson = JsonSerializer.Serialize(rivals.ToImmutable(), Json.Options),
            DraftedAt = now,
            DraftedBy = actor,
        };
        context.SpecificationVersions.Add(draft);
        try
        {
            await context.SaveWithAuditAsync(
                [
                    new AuditDraft(
                        actor, "specification.drafted", "specification", $"{code}/{version}", After: JsonNode.Parse(draft.CriteriaJson)),
                ],
                cancellation);
            await transaction.CommitAsync(cancellation);
        }
        catch (DbUpdateException e) when (e.InnerException is PostgresException { SqlState: PostgresErrorCodes.UniqueViolation })
        {
            return Problem.Conflict("changed", "Changed in the meantime", "Somebody else drafted a version at the same time; try again.");
        }

        return await context.DtoAsync(draft, cancellation);
    }
}
