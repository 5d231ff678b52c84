using Qc.Chemistry;
using Qc.Engine.Prediction.Environments;
using Qc.Engine.Structures;

namespace Qc.Engine.Tests.Prediction;

/// <summary>Structures for the tests of this folder, and the way to name an atom of one.</summary>
internal static class Examples
{
    // One reader for all tests: starting its toolkit takes a second.
    private static readonly RdkitStructureReader Reader = new();

    public static Molecule Read(string smiles) =>
        Reader.ReadSmiles(smiles).Structure?.Molecule ?? throw new ArgumentException($"'{smiles}' cannot be read.", nameof(smiles));

    public static PerceivedMolecule Perceive(string smiles) => new(Read(smiles));

    /// <summary>The first atom at which a pattern fits.</summary>
    public static int AtomAt(PerceivedMolecule molecule, string pattern)
    {
        EnvironmentPattern read = EnvironmentPatternReader.Read(pattern);
        return molecule.Molecule.Atoms.First(atom => read.IsAt(molecule, atom.Index)).Index;
    }
}
