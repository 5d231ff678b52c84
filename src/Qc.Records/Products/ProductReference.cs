namespace Qc.Records.Products;

/// <summary>A checked lot that the method owner proposed as the product's reference. In force once a second person released it.</summary>
public sealed class ProductReference
{
    /// <summary>Identifier.</summary>
    public required string Id { get; init; }

    /// <summary>The product.</summary>
    public required string ProductId { get; init; }

    /// <summary>Number within the product, from 1; the highest one in force holds.</summary>
    public required int Number { get; init; }

    /// <summary>The lot.</summary>
    public required string LotId { get; init; }

    /// <summary>The check whose fitted shifts and couplings it takes.</summary>
    public required string ComputationId { get; init; }

    /// <summary>Those shifts and couplings.</summary>
    public required string ConstantsJson { get; init; }

    /// <summary>When it was proposed.</summary>
    public required DateTimeOffset ProposedAt { get; init; }

    /// <summary>By whom.</summary>
    public required string ProposedBy { get; init; }
}

/// <summary>A release or a withdrawal of a reference.</summary>
public sealed class ProductReferenceEvent
{
    /// <summary>Released by a second person.</summary>
    public const string Released = "released";

    /// <summary>No longer used for new lots.</summary>
    public const string Withdrawn = "withdrawn";

    /// <summary>Identifier.</summary>
    public required string Id { get; init; }

    /// <summary>The reference.</summary>
    public required string ReferenceId { get; init; }

    /// <summary><see cref="Released"/> or <see cref="Withdrawn"/>.</summary>
    public required string Kind { get; init; }

    /// <summary>When.</summary>
    public required DateTimeOffset At { get; init; }

    /// <summary>By whom.</summary>
    public required string By { get; init; }

    /// <summary>The signature.</summary>
    public required string SignatureId { get; init; }
}
