namespace Qc.Chemistry.Toolkit;

/// <summary>Refuses graphs that are not one definite substance: patterns, wildcards, radicals, and those too large.</summary>
internal static class GraphCheck
{
    /// <summary>Why the graph is refused, or null.</summary>
    public static StructureError? Objection(ToolkitGraph graph, StructureLimits limits)
    {
        if (graph.Atoms.Count == 0)
        {
            return new StructureError("The structure has no atoms.", null);
        }

        if (graph.Atoms.Count(atom => atom.Z != 1) > limits.HeavyAtoms)
        {
            return new StructureError($"The structure has more than {limits.HeavyAtoms} heavy atoms.", null);
        }

        for (int i = 0; i < graph.Atoms.Count; i++)
        {
            if (graph.Atoms[i].Z == 0)
            {
                return new StructureError($"Atom {i + 1} is a wildcard or an R group, not an element.", null);
            }

            if (graph.Atoms[i].NRad > 0)
            {
                return new StructureError(
                    $"Atom {i + 1} is a radical; a bond or a hydrogen is missing, or the substance is not one this service judges.", null);
            }
        }

        if (graph.Extensions.Any(extension => extension.Name == "rdkitQueries"))
        {
            return new StructureError("The structure holds search patterns (atom lists or open bonds), not definite atoms and bonds.", null);
        }

        return graph.Bonds.Any(bond => bond.Bo is < 1 or > 3)
            ? new StructureError("The structure holds a bond that is not single, double or triple.", null)
            : null;
    }
}
