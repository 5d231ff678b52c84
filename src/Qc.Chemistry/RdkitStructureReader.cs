using Qc.Chemistry.Toolkit;
using Qc.Engine.Structures;

namespace Qc.Chemistry;

/// <summary>
/// Reads and draws structures with the open-source toolkit RDKit (BSD licence), run as WebAssembly inside this process.
/// A text is parsed and sanitised, written as canonical SMILES, and that SMILES is read again: atom numbers are those of
/// the canonical form whatever the input.
/// </summary>
public sealed class RdkitStructureReader : IStructureReader, IDisposable
{
    private readonly StructureLimits _limits;
    private readonly ScriptedToolkit _toolkit;

    /// <summary>Prepares a reader; the toolkit itself starts at the first call, once for all readers of the process.</summary>
    public RdkitStructureReader(StructureLimits? limits = null)
    {
        _limits = limits ?? new StructureLimits();
        _toolkit = new ScriptedToolkit(_limits.CallTime);
    }

    /// <inheritdoc/>
    public StructureResult ReadSmiles(string smiles)
    {
        string text = smiles.Trim();
        return InputCheck.Smiles(text, _limits) is { } error ? Refusal(error) : Read(text);
    }

    /// <inheritdoc/>
    public StructureResult ReadMolfile(string molfile) =>
        InputCheck.Molfile(molfile, _limits) is { } error ? Refusal(error) : Read(molfile);

    /// <inheritdoc/>
    /// <exception cref="ArgumentException">The SMILES cannot be read.</exception>
    public string DrawSvg(string smiles, int widthPixels, int heightPixels, bool numbered)
    {
        if (InputCheck.Smiles(smiles, _limits) is { } error)
        {
            throw new ArgumentException(error.Message, nameof(smiles));
        }

        ToolkitReply graph = _toolkit.Call("qcInspect", smiles);
        if (graph.Graph is not { Molecules: [var molecule] })
        {
            throw new ArgumentException(LogReader.ErrorOf(graph.Refused ?? "").Message, nameof(smiles));
        }

        string text = numbered ? Drawing.WithNumbers(smiles, molecule.Atoms.Count) : smiles;
        string svg = _toolkit.Call("qcDraw", text, Drawing.Details(widthPixels, heightPixels)).Svg
            ?? throw new ArgumentException("The structure cannot be drawn.", nameof(smiles));
        return Drawing.Clean(svg, widthPixels, heightPixels);
    }

    /// <summary>Ends the reader; the toolkit stays for others, until the process ends.</summary>
    public void Dispose() => _toolkit.Dispose();

    private StructureResult Read(string text)
    {
        try
        {
            return ReadChecked(text);
        }
        catch (ToolkitFailedException failure)
        {
            return Refusal(new StructureError(failure.Message, null));
        }
    }

    private StructureResult ReadChecked(string text)
    {
        ToolkitReply first = _toolkit.Call("qcInspect", text);
        if (first.Graph is not { Molecules: [var asWritten] })
        {
            return Refusal(LogReader.ErrorOf(first.Refused ?? ""));
        }

        if (GraphCheck.Objection(asWritten, _limits) is { } objection)
        {
            return Refusal(objection);
        }

        ToolkitReply canonical = _toolkit.Call("qcCanonical", text);
        if (canonical.Smiles is not { Length: > 0 } smiles)
        {
            return Refusal(LogReader.ErrorOf(canonical.Refused ?? ""));
        }

        ToolkitReply described = Settle(smiles);
        if (described is not { Graph.Molecules: [var graph], Stereo: { } stereo, Smiles: { } final })
        {
            return Refusal(new StructureError("The structure toolkit cannot read its own canonical form of this structure.", null));
        }

        Molecule molecule = GraphReader.Build(graph, stereo);
        return MolarMass.IsKnown(molecule)
            ? new StructureResult(
                new ReadStructure(molecule, final, described.Inchi ?? "", described.InchiKey ?? "", described.MolBlock ?? ""), null)
            : Refusal(new StructureError("The structure holds an element or isotope without a standard atomic weight on file.", null));
    }

    // Writing and reading settles at once for almost every structure; stereo marks that turn out idle can take a second round.
    private ToolkitReply Settle(string smiles)
    {
        const int mostRounds = 4;
        ToolkitReply described = _toolkit.Call("qcDescribe", smiles);
        for (int round = 0; round < mostRounds && described.Smiles is { } again && again != smiles; round++)
        {
            smiles = again;
            described = _toolkit.Call("qcDescribe", smiles);
        }

        return described.Smiles == smiles ? described : new ToolkitReply();
    }

    private static StructureResult Refusal(StructureError error) => new(null, error);
}
