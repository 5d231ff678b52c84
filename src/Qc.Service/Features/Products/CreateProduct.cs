using System.Text.Json;
using System.Text.Json.Nodes;
using Microsoft.EntityFrameworkCore;
using Npgsql;
using Qc.Chemistry;
using Qc.Engine.Prediction;
using Qc.Engine.Structures;
using Qc.Records;
using Qc.Records.Audit;
using Qc.Records.Products;
using Qc.Service.Http;

namespace Qc.Service.Features.Products;

/// <summary>Sets up a product: reads its structure, works out what is expected of it, and keeps both.</summary>
public sealed class CreateProduct(QcDbContext context, IStructureReader structures)
{
    /// <summary>Solvents whose residual signals the engine knows.</summary>
    public static IReadOnlyList<string> Solvents { get; } = ["CDCl3", "DMSO-d6", "CD3OD", "D2O", "acetone-d6", "CD3CN", "C6D6"];

    /// <summary>Makes the product; its code must be new.</summary>
    public async Task<Outcome<ProductDto>> RunAsync(ProductRequest request, string actor, CancellationToken cancellation)
    {
        if (Check(request) is { } problem)
        {
            return problem;
        }

        StructureResult read = request.Structure.Smiles is { } smiles
            ? structures.ReadSmiles(smiles)
            : structures.ReadMolfile(request.Structure.Molfile!);
        if (read.Structure is not { } structure)
        {
            return StructureProblem(read.Error!, request.Structure.Smiles is not null ? "/structure/smiles" : "/structure/molfile");
        }

        Expectation expectation = Predictor.Predict(structure.Molecule, Topicity.Groups(structure.Molecule), request.Solvent);
        Engine.Values.Uncertain mass = MolarMass.Of(structure.Molecule);
        await using var transaction = await context.Database.BeginTransactionAsync(cancellation);
        DateTimeOffset now = await context.DatabaseTimeAsync(cancellation);
        var product = new Product
        {
            Id = Ids.New(now),
            Code = request.Code,
            Name = request.Name,
            Smiles = structure.Smiles,
            Inchi = structure.Inchi,
            InchiKey = structure.InchiKey,
            Formula = MolecularFormula.Of(structure.Molecule).ToString(),
            MolarMassGramPerMol = mass.Value,
            MolarMassStandardUncertaintyGramPerMol = mass.StandardUncertainty,
            MolBlock = structure.MolBlock,
            Solvent = request.Solvent,
            Nucleus = request.Nucleus,
            ExpectationJson = JsonSerializer.Serialize(ExpectationDto.Of(expectation), Json.Options),
            CreatedAt = now,
            CreatedBy = actor,
        };
        context.Products.Add(product);
        try
        {
            await context.SaveWithAuditAsync(
                [
                    new AuditDraft(actor, "product.created", "product", product.Code, After: new JsonObject
                    {
                        ["code"] = product.Code,
                        ["name"] = product.Name,
                        ["smiles"] = product.Smiles,
                        ["solvent"] = product.Solvent,
                        ["nucleus"] = product.Nucleus,
                    }),
                ],
                cancellation);
            await transaction.CommitAsync(cancellation);
        }
        catch (DbUpdateException e) when (e.InnerException is PostgresException { SqlState: PostgresErrorCodes.UniqueViolation })
        {
            return Problem.Conflict(
                "product-exists", "The product exists already", $"There is a product {request.Code} already.", new FieldError("/code", "Choose another code."));
        }

        return ReadProduct.Dto(product, null);
    }

    /// <summary>A structure that cannot be read, saying where.</summary>
    public static Problem StructureProblem(StructureError error, string pointer)
    {
        string place = error.Position is { } position ? $" (at position {position})" : "";
        return Problem.Invalid("structure-unreadable", "The structure cannot be read", error.Message + place, new FieldError(pointer, error.Message + place));
    }

    private static Problem? Check(ProductRequest request)
    {
        var errors = new List<FieldError>();
        if (request.Code.Length is 0 or > 64 || request.Code.Any(c => !(char.IsAsciiLetterOrDigit(c) || c is '-' or '_' or '.')))
        {
            errors.Add(new FieldError("/code", "A code has 1 to 64 letters, digits, '-', '_' or '.'."));
        }

        if (string.IsNullOrWhiteSpace(request.Name) || request.Name.Length > 200)
        {
            errors.Add(new FieldError("/name", "A name has 1 to 200 characters."));
        }

        if (!Solvents.Contains(request.Solvent))
        {
            errors.Add(new FieldError("/solvent", $"Choose one of {string.Join(", ", Solvents)}."));
        }

        if (request.Nucleus != "1H")
        {
            errors.Add(new FieldError("/nucleus", "Only 1H is judged by this version."));
        }

        if (request.Structure is null || (request.Structure.Smiles is null) == (request.Structure.Molfile is null))
        {
            errors.Add(new FieldError("/structure", "Give either smiles or molfile."));
        }

        return errors.Count == 0 ? null : Problem.Invalid("invalid-field", "A field is wrong", errors[0].Detail, [.. errors]);
    }
}
