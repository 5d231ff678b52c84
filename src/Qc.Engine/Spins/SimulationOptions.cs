namespace Qc.Engine.Spins;

/// <summary>Where a simulation may be short, and by how much.</summary>
public sealed record SimulationOptions
{
    /// <summary>The values used when none are given.</summary>
    public static SimulationOptions Default { get; } = new();

    /// <summary>
    /// Clusters whose largest block of equal total M_z has at most this many states are computed exactly;
    /// larger ones are split. 1000 admits 12 distinct spins (924 states).
    /// </summary>
    public int LargestExactBlock { get; init; } = 1000;

    /// <summary>
    /// Largest block of one neighbourhood of a split cluster. 70 admits 8 distinct spins. A neighbourhood always
    /// holds its whole strongly coupled core, even if that alone is larger than this.
    /// </summary>
    public int LargestNeighbourhoodBlock { get; init; } = 70;

    /// <summary>Lines of one site closer than this, in Hz, become one line at their weighted mean. 0 keeps all apart.</summary>
    public double MergeHertz { get; init; } = 1e-6;

    /// <summary>
    /// A line weaker than this share of its cluster is left out, the weakest first, as long as all that is left out
    /// stays below <see cref="DroppedInAll"/>; the others are scaled up to keep the total.
    /// </summary>
    public double DroppedLine { get; init; } = 1e-5;

    /// <summary>Largest share of the intensity of a cluster that may be left out in all.</summary>
    public double DroppedInAll { get; init; } = 1e-3;
}
