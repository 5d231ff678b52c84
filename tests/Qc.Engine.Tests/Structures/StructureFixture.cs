using Qc.Chemistry;
using Qc.Engine.Structures;
using Xunit;

namespace Qc.Engine.Tests.Structures;

/// <summary>Reads the structures the tests are about; the toolkit starts once.</summary>
public sealed class StructureFixture : IDisposable
{
    private readonly RdkitStructureReader _reader = new();

    public Molecule Read(string smiles)
    {
        StructureResult result = _reader.ReadSmiles(smiles);
        Assert.True(result.Structure is not null, $"{smiles}: {result.Error?.Message}");
        return result.Structure.Molecule;
    }

    public void Dispose() => _reader.Dispose();
}
