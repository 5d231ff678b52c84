namespace Qc.Records.Products;

/// <summary>A product: what the label says, and what is expected of it.</summary>
public sealed class Product
{
    /// <summary>Identifier.</summary>
    public required string Id { get; init; }

    /// <summary>The plant's code, unique.</summary>
    public required string Code { get; init; }

    /// <summary>Name.</summary>
    public required string Name { get; init; }

    /// <summary>Canonical SMILES.</summary>
    public required string Smiles { get; init; }

    /// <summary>InChI.</summary>
    public required string Inchi { get; init; }

    /// <summary>InChIKey.</summary>
    public required string InchiKey { get; init; }

    /// <summary>Molecular formula in Hill order.</summary>
    public required string Formula { get; init; }

    /// <summary>Molar mass in g/mol.</summary>
    public required double MolarMassGramPerMol { get; init; }

    /// <summary>Its standard uncertainty in g/mol.</summary>
    public required double MolarMassStandardUncertaintyGramPerMol { get; init; }

    /// <summary>Molfile with coordinates, atoms in canonical order.</summary>
    public required string MolBlock { get; init; }

    /// <summary>Solvent that the method prescribes.</summary>
    public required string Solvent { get; init; }

    /// <summary>Observed nucleus.</summary>
    public required string Nucleus { get; init; }

    /// <summary>Expected signals as they were answered when the product was made.</summary>
    public required string ExpectationJson { get; init; }

    /// <summary>When it was made.</summary>
    public required DateTimeOffset CreatedAt { get; init; }

    /// <summary>By whom.</summary>
    public required string CreatedBy { get; init; }
}

/// <summary>A version of a product's specification. Draft until an approval event is there.</summary>
public sealed class SpecificationVersion
{
    /// <summary>Identifier.</summary>
    public required string Id { get; init; }

    /// <summary>The product.</summary>
    public required string ProductId { get; init; }

    /// <summary>Version, from 1.</summary>
    public required int Version { get; init; }

    /// <summary>The criteria as posted.</summary>
    public required string PostedJson { get; init; }

    /// <summary>The criteria with every default filled in.</summary>
    public required string CriteriaJson { get; init; }

    /// <summary>Named mix-ups: [{ name, smiles }].</summary>
    public required string RivalsJson { get; init; }

    /// <summary>When it was drafted.</summary>
    public required DateTimeOffset DraftedAt { get; init; }

    /// <summary>By whom.</summary>
    public required string DraftedBy { get; init; }
}

/// <summary>An approval or a retirement of a specification version.</summary>
public sealed class SpecificationEvent
{
    /// <summary>Approved by a second person.</summary>
    public const string Approved = "approved";

    /// <summary>No longer to be used for new lots.</summary>
    public const string Retired = "retired";

    /// <summary>Identifier.</summary>
    public required string Id { get; init; }

    /// <summary>The specification version.</summary>
    public required string SpecificationId { get; init; }

    /// <summary><see cref="Approved"/> or <see cref="Retired"/>.</summary>
    public required string Kind { get; init; }

    /// <summary>From when it holds.</summary>
    public required DateTimeOffset EffectiveFrom { get; init; }

    /// <summary>When it was decided.</summary>
    public required DateTimeOffset At { get; init; }

    /// <summary>By whom.</summary>
    public required string By { get; init; }

    /// <summary>The signature.</summary>
    public string? SignatureId { get; init; }
}
