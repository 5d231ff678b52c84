using System.Collections.Immutable;
using System.Text.Json.Serialization;
using Qc.Engine.Prediction;
using Qc.Service.Features.Specifications;

namespace Qc.Service.Features.Products;

/// <summary>Body of POST /api/v1/products.</summary>
public sealed record ProductRequest
{
    /// <summary>The plant's code.</summary>
    public required string Code { get; init; }

    /// <summary>Name.</summary>
    public required string Name { get; init; }

    /// <summary>Structure.</summary>
    public required StructureRequest Structure { get; init; }

    /// <summary>Solvent of the method.</summary>
    public string Solvent { get; init; } = "CDCl3";

    /// <summary>Observed nucleus.</summary>
    public string Nucleus { get; init; } = "1H";
}

/// <summary>A structure: one of the two.</summary>
public sealed record StructureRequest
{
    /// <summary>SMILES.</summary>
    public string? Smiles { get; init; }

    /// <summary>Molfile, V2000 or V3000.</summary>
    public string? Molfile { get; init; }
}

/// <summary>A product as answered.</summary>
public sealed record ProductDto
{
    /// <summary>The plant's code.</summary>
    public required string Code { get; init; }

    /// <summary>Name.</summary>
    public required string Name { get; init; }

    /// <summary>Canonical SMILES.</summary>
    public required string Smiles { get; init; }

    /// <summary>InChI.</summary>
    public required string Inchi { get; init; }

    /// <summary>InChIKey.</summary>
    public required string InchiKey { get; init; }

    /// <summary>Molecular formula.</summary>
    public required string Formula { get; init; }

    /// <summary>Molar mass in g/mol.</summary>
    public required double MolarMassGramPerMol { get; init; }

    /// <summary>Its standard uncertainty.</summary>
    public required double MolarMassStandardUncertaintyGramPerMol { get; init; }

    /// <summary>Solvent of the method.</summary>
    public required string Solvent { get; init; }

    /// <summary>Observed nucleus.</summary>
    public required string Nucleus { get; init; }

    /// <summary>Proton groups with expected shifts.</summary>
    public required ImmutableArray<ProtonGroupDto> ProtonGroups { get; init; }

    /// <summary>Expected couplings.</summary>
    public required ImmutableArray<CouplingDto> Couplings { get; init; }

    /// <summary>The specification in force, null where none is.</summary>
    [JsonIgnore(Condition = JsonIgnoreCondition.WhenWritingNull)]
    public SpecificationDto? Specification { get; init; }

    /// <summary>When it was made.</summary>
    public required DateTimeOffset CreatedAt { get; init; }

    /// <summary>By whom.</summary>
    public required string CreatedBy { get; init; }
}

/// <summary>An expected proton group.</summary>
/// <param name="Group">Name, e.g. "H-4".</param>
/// <param name="Atoms">Atom numbers, from 1, in the order of the canonical SMILES.</param>
/// <param name="Count">Protons.</param>
/// <param name="ExpectedPpm">Shift.</param>
/// <param name="ExpectedStandardUncertaintyPpm">Its standard uncertainty.</param>
/// <param name="Exchangeable">Whether it exchanges and is never asserted.</param>
/// <param name="Basis">What the shift rests on.</param>
/// <param name="Rows">Rows of the tables used.</param>
public sealed record ProtonGroupDto(
    string Group,
    ImmutableArray<int> Atoms,
    int Count,
    double ExpectedPpm,
    double ExpectedStandardUncertaintyPpm,
    bool Exchangeable,
    Basis Basis,
    ImmutableArray<string> Rows);

/// <summary>An expected coupling.</summary>
/// <param name="GroupA">One group.</param>
/// <param name="GroupB">The other; a nucleus such as "19F" where it is no proton.</param>
/// <param name="ExpectedHz">Coupling with sign.</param>
/// <param name="ExpectedStandardUncertaintyHz">Its standard uncertainty.</param>
/// <param name="Bonds">Number of bonds, 0 where not stated.</param>
/// <param name="Row">Rule used.</param>
public sealed record CouplingDto(
    string GroupA, string GroupB, double ExpectedHz, double ExpectedStandardUncertaintyHz, int Bonds, string Row);

/// <summary>What is stored of a product's expected signals.</summary>
/// <param name="ProtonGroups">Groups.</param>
/// <param name="Couplings">Couplings.</param>
public sealed record ExpectationDto(ImmutableArray<ProtonGroupDto> ProtonGroups, ImmutableArray<CouplingDto> Couplings)
{
    /// <summary>As the API writes it.</summary>
    public static ExpectationDto Of(Expectation expectation)
    {
        string Name(int set) => expectation.Protons.Groups[expectation.Protons.Sets[set].Group].Name;
        return new ExpectationDto(
            [
                .. expectation.Protons.Groups.Select(g => new ProtonGroupDto(
                    g.Name,
                    [.. g.Atoms.Select(a => a + 1)],
                    g.Count,
                    expectation.Shifts[g.Index].ShiftPpm,
                    expectation.Shifts[g.Index].StandardUncertaintyPpm,
                    g.Lability == Engine.Structures.Lability.Exchangeable,
                    expectation.Shifts[g.Index].Basis,
                    expectation.Shifts[g.Index].Rows)),
            ],
            [
                .. expectation.Couplings
                    .Select(c => new CouplingDto(Name(c.SetA), Name(c.SetB), c.Hertz, c.StandardUncertaintyHertz, c.Bonds, c.Row))
                    .Concat(expectation.HeteroCouplings.Select(c =>
                        new CouplingDto(Name(c.Set), c.Nucleus, c.Hertz, c.StandardUncertaintyHertz, 0, c.Row)))
                    .Distinct(),
            ]);
    }
}
