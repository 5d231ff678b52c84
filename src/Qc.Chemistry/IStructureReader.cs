using Qc.Engine.Structures;

namespace Qc.Chemistry;

/// <summary>A structure as read: graph and names.</summary>
/// <param name="Molecule">The graph; atom order is that of <paramref name="Smiles"/>'s canonical form, so numbers are stable.</param>
/// <param name="Smiles">Canonical SMILES.</param>
/// <param name="Inchi">InChI.</param>
/// <param name="InchiKey">InChIKey.</param>
/// <param name="MolBlock">Molfile (V2000 or V3000) with coordinates.</param>
public sealed record ReadStructure(Molecule Molecule, string Smiles, string Inchi, string InchiKey, string MolBlock);

/// <summary>Why a structure could not be read.</summary>
/// <param name="Message">One plain sentence.</param>
/// <param name="Position">Character (SMILES) or line (molfile) at fault, from 1, where known; else null.</param>
public sealed record StructureError(string Message, int? Position);

/// <summary>Outcome of reading a structure; exactly one of the two is set.</summary>
/// <param name="Structure">What was read.</param>
/// <param name="Error">Why not.</param>
public sealed record StructureResult(ReadStructure? Structure, StructureError? Error);

/// <summary>Reads and draws structures. Safe to call from several threads.</summary>
public interface IStructureReader
{
    /// <summary>Reads a SMILES string.</summary>
    StructureResult ReadSmiles(string smiles);

    /// <summary>Reads a molfile, V2000 or V3000.</summary>
    StructureResult ReadMolfile(string molfile);

    /// <summary>Draws the structure as SVG with atom numbers from 1; <paramref name="smiles"/> is canonical SMILES.</summary>
    string DrawSvg(string smiles, int widthPixels, int heightPixels, bool numbered);
}
