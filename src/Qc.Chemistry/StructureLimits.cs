namespace Qc.Chemistry;

/// <summary>What a structure text may ask of the toolkit at most; beyond it, a refusal, so that no input can stall the service.</summary>
public sealed record StructureLimits
{
    /// <summary>Longest SMILES, in characters.</summary>
    public int SmilesCharacters { get; init; } = 2_000;

    /// <summary>Longest molfile, in characters.</summary>
    public int MolfileCharacters { get; init; } = 200_000;

    /// <summary>Most heavy atoms.</summary>
    public int HeavyAtoms { get; init; } = 200;

    /// <summary>Longest time of one call of the toolkit.</summary>
    public TimeSpan CallTime { get; init; } = TimeSpan.FromSeconds(5);
}
