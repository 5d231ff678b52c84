using System.Collections.Immutable;
using Qc.Engine.Prediction.Environments;
using Qc.Engine.Structures;

namespace Qc.Engine.Rivals;

/// <summary>A kind of structure that no plant would meet.</summary>
/// <param name="Id">Stable id, e.g. "gem-diol".</param>
/// <param name="Description">What it is.</param>
/// <param name="Reason">Why it is left out.</param>
/// <param name="IsOnByDefault">Whether it is left out where nothing else is said.</param>
public sealed record RivalFilter(string Id, string Description, string Reason, bool IsOnByDefault);

/// <summary>Leaves out structures that no plant would meet; which kinds is in Data/rival-filters.tsv. Immutable.</summary>
public sealed class RivalFilters
{
    private static readonly ImmutableArray<(RivalFilter Filter, Func<PerceivedMolecule, bool> Fits)> Table =
        [.. TabularResource.Rows("rival-filters").Select(Read)];

    private readonly ImmutableHashSet<string> _on;

    private RivalFilters(ImmutableHashSet<string> on) => _on = on;

    /// <summary>All kinds, in table order.</summary>
    public static ImmutableArray<RivalFilter> All { get; } = [.. Table.Select(row => row.Filter)];

    /// <summary>Those that are on by default.</summary>
    public static RivalFilters Default { get; } = new([.. All.Where(filter => filter.IsOnByDefault).Select(filter => filter.Id)]);

    /// <summary>None at all.</summary>
    public static RivalFilters None { get; } = new([]);

    /// <summary>The same with one kind switched.</summary>
    /// <exception cref="ArgumentException">There is no such kind.</exception>
    public RivalFilters With(string id, bool isOn)
    {
        if (!All.Any(filter => filter.Id == id))
        {
            throw new ArgumentException($"There is no filter '{id}'.", nameof(id));
        }

        return new RivalFilters(isOn ? _on.Add(id) : _on.Remove(id));
    }

    /// <summary>The first kind that is on and that the structure is of; null where it is kept.</summary>
    public RivalFilter? Objection(Molecule molecule)
    {
        var perceived = new PerceivedMolecule(molecule);
        foreach ((RivalFilter filter, Func<PerceivedMolecule, bool> fits) in Table)
        {
            if (_on.Contains(filter.Id) && fits(perceived))
            {
                return filter;
            }
        }

        return null;
    }

    private static (RivalFilter Filter, Func<PerceivedMolecule, bool> Fits) Read(ImmutableDictionary<string, string> row)
    {
        var filter = new RivalFilter(row["id"], row["description"], row["reason"], row["default"] == "on");
        string text = row["pattern"];
        if (text[0] == '@')
        {
            return (filter, text switch
            {
                "@anti-bredt" => RingStrain.HasBridgeheadDoubleBond,
                "@joined-small-rings" => RingStrain.HasJoinedSmallRings,
                _ => throw new FormatException($"Table 'rival-filters': there is no rule '{text}'."),
            });
        }

        ImmutableArray<EnvironmentPattern> patterns = [.. text.Split(" | ").Select(EnvironmentPatternReader.Read)];
        return (filter, molecule => patterns.Any(pattern => Enumerable.Range(0, molecule.Molecule.Atoms.Length).Any(atom => pattern.IsAt(molecule, atom))));
    }
}
