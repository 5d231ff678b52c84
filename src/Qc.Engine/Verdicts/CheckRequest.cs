using System.Collections.Immutable;
using Qc.Engine.Reading;
using Qc.Engine.Structures;

namespace Qc.Engine.Verdicts;

/// <summary>One spectrum as submitted.</summary>
/// <param name="Name">The submitter's name for it, e.g. "proton".</param>
/// <param name="Format">Its format.</param>
/// <param name="Content">The bytes as received.</param>
public sealed record SubmittedSpectrum(string Name, SpectrumFormat Format, ReadOnlyMemory<byte> Content);

/// <summary>Another substance that may stand beside, or in place of, the product.</summary>
/// <param name="Name">Its name.</param>
/// <param name="Smiles">Canonical SMILES.</param>
/// <param name="Structure">Its structure.</param>
public sealed record NamedStructure(string Name, string Smiles, Molecule Structure);

/// <summary>An internal standard weighed into the sample.</summary>
/// <param name="Substance">Its name and structure.</param>
/// <param name="MassMg">Mass in mg.</param>
/// <param name="PurityPercent">Mass fraction in percent from its certificate.</param>
/// <param name="PurityStandardUncertaintyPercent">Its standard uncertainty.</param>
public sealed record InternalStandard(
    NamedStructure Substance, double MassMg, double PurityPercent, double PurityStandardUncertaintyPercent);

/// <summary>What was weighed.</summary>
/// <param name="MassMg">Sample mass in mg, where given.</param>
/// <param name="MassStandardUncertaintyMg">Standard uncertainty of each weighing in mg.</param>
/// <param name="InternalStandard">The internal standard, where one was added.</param>
public sealed record SampleFacts(double? MassMg, double MassStandardUncertaintyMg, InternalStandard? InternalStandard);

/// <summary>Everything the engine needs to judge a lot. Same request, same report, to the bit.</summary>
public sealed record CheckRequest
{
    /// <summary>The product's name, for sentences.</summary>
    public required string ProductName { get; init; }

    /// <summary>The expected structure.</summary>
    public required NamedStructure Product { get; init; }

    /// <summary>Solvent that the method prescribes, as in Data/Solvents: "CDCl3", "DMSO-d6", "CD3OD", "D2O", "acetone-d6", "CD3CN", "C6D6".</summary>
    public required string Solvent { get; init; }

    /// <summary>Observed nucleus: "1H".</summary>
    public string Nucleus { get; init; } = "1H";

    /// <summary>Complete criteria.</summary>
    public Criteria Criteria { get; init; } = new();

    /// <summary>Spectra as submitted; at least one.</summary>
    public required ImmutableArray<SubmittedSpectrum> Spectra { get; init; }

    /// <summary>What was weighed, where an assay is asked for.</summary>
    public SampleFacts? Sample { get; init; }

    /// <summary>The product's reference lot, where it has one in force.</summary>
    public ReferenceLot? Reference { get; init; }

    /// <summary>Mix-ups the method owner named: structures to be told apart.</summary>
    public ImmutableArray<NamedStructure> Rivals { get; init; } = [];
}
