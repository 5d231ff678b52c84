using System.Text.Json;
using Microsoft.EntityFrameworkCore;
using Qc.Records;
using Qc.Records.Products;
using Qc.Service.Features.Specifications;
using Qc.Service.Http;

namespace Qc.Service.Features.Products;

/// <summary>Reads products.</summary>
public sealed class ReadProduct(QcDbContext context, TimeProvider time)
{
    /// <summary>One product with the specification in force now.</summary>
    public async Task<Outcome<ProductDto>> OneAsync(string code, CancellationToken cancellation)
    {
        Product? product = await context.Products.AsNoTracking().SingleOrDefaultAsync(p => p.Code == code, cancellation);
        if (product is null)
        {
            return Problem.NotFound("product");
        }

        SpecificationVersion? inForce = await context.InForceAsync(product.Id, time.GetUtcNow(), cancellation);
        return Dto(product, inForce is null ? null : await context.DtoAsync(inForce, cancellation));
    }

    /// <summary>All products by code.</summary>
    public async Task<IReadOnlyList<ProductDto>> AllAsync(CancellationToken cancellation) =>
        [.. (await context.Products.AsNoTracking().OrderBy(p => p.Code).ToListAsync(cancellation)).Select(p => Dto(p, null))];

    /// <summary>As the API writes it.</summary>
    public static ProductDto Dto(Product product, SpecificationDto? specification)
    {
        ExpectationDto expectation = JsonSerializer.Deserialize<ExpectationDto>(product.ExpectationJson, Json.Options)!;
        return new ProductDto
        {
            Code = product.Code,
            Name = product.Name,
            Smiles = product.Smiles,
            Inchi = product.Inchi,
            InchiKey = product.InchiKey,
            Formula = product.Formula,
            MolarMassGramPerMol = product.MolarMassGramPerMol,
            MolarMassStandardUncertaintyGramPerMol = product.MolarMassStandardUncertaintyGramPerMol,
            Solvent = product.Solvent,
            Nucleus = product.Nucleus,
            ProtonGroups = expectation.ProtonGroups,
            Couplings = expectation.Couplings,
            Specification = specification,
            CreatedAt = product.CreatedAt,
            CreatedBy = product.CreatedBy,
        };
    }
}
