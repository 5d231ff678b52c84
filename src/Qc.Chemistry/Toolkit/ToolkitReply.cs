using System.Text.Json;
using System.Text.Json.Serialization;

namespace Qc.Chemistry.Toolkit;

/// <summary>What the glue script answers; which fields are set depends on the question.</summary>
internal sealed record ToolkitReply
{
    /// <summary>The toolkit's log where it could not read the text; else null.</summary>
    public string? Refused { get; init; }

    /// <summary>Canonical SMILES.</summary>
    public string? Smiles { get; init; }

    /// <summary>The graph in the toolkit's JSON interchange form.</summary>
    public ToolkitGraphFile? Graph { get; init; }

    /// <summary>CIP descriptors.</summary>
    public ToolkitStereo? Stereo { get; init; }

    /// <summary>InChI, empty where none can be given.</summary>
    public string? Inchi { get; init; }

    /// <summary>InChIKey, empty where there is no InChI.</summary>
    public string? InchiKey { get; init; }

    /// <summary>Molfile with 2D coordinates.</summary>
    public string? MolBlock { get; init; }

    /// <summary>A drawing.</summary>
    public string? Svg { get; init; }

    /// <summary>Reads an answer of the glue script.</summary>
    /// <exception cref="JsonException">The answer is not of the expected form: the script and this record disagree.</exception>
    public static ToolkitReply Parse(string json) =>
        JsonSerializer.Deserialize(json, ToolkitJson.Default.ToolkitReply) ?? throw new JsonException("The toolkit answered null.");
}

/// <summary>The interchange file: defaults and molecules.</summary>
internal sealed record ToolkitGraphFile(IReadOnlyList<ToolkitGraph> Molecules);

/// <summary>A molecule of the interchange file.</summary>
internal sealed record ToolkitGraph(
    IReadOnlyList<ToolkitAtom> Atoms,
    IReadOnlyList<ToolkitBond> Bonds,
    IReadOnlyList<ToolkitExtension> Extensions);

/// <summary>An atom; the defaults are those the file states for every molecule.</summary>
internal sealed record ToolkitAtom(int Z = 6, int ImpHs = 0, int Chg = 0, int NRad = 0, int Isotope = 0, string Stereo = "unspecified");

/// <summary>A bond with Kekulé order.</summary>
internal sealed record ToolkitBond(
    IReadOnlyList<int> Atoms,
    int Bo = 1,
    string Stereo = "unspecified",
    IReadOnlyList<int>? StereoAtoms = null);

/// <summary>Aromaticity and rings ("rdkitRepresentation") or search patterns ("rdkitQueries").</summary>
internal sealed record ToolkitExtension(
    string Name,
    IReadOnlyList<int>? AromaticAtoms = null,
    IReadOnlyList<int>? AromaticBonds = null,
    IReadOnlyList<IReadOnlyList<int>>? AtomRings = null);

/// <summary>CIP descriptors: [atom, "(R)"] and [atom, atom, "(E)"].</summary>
internal sealed record ToolkitStereo(
    [property: JsonPropertyName("CIP_atoms")] IReadOnlyList<IReadOnlyList<JsonElement>> Atoms,
    [property: JsonPropertyName("CIP_bonds")] IReadOnlyList<IReadOnlyList<JsonElement>> Bonds);

/// <summary>Compiled JSON readers of the answers.</summary>
[JsonSourceGenerationOptions(PropertyNamingPolicy = JsonKnownNamingPolicy.CamelCase)]
[JsonSerializable(typeof(ToolkitReply))]
internal sealed partial class ToolkitJson : JsonSerializerContext;
