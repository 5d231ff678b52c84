using System.Collections.Immutable;

namespace Qc.Engine.Prediction.Environments;

/// <summary>A table whose rows select their environment by a pattern; rows stand specific before general, and the first that fits wins.</summary>
internal sealed class PatternTable
{
    private PatternTable(string name, ImmutableArray<PatternFact> rows)
    {
        Name = name;
        Rows = rows;
    }

    /// <summary>Name of the table's file, without ending.</summary>
    public string Name { get; }

    /// <summary>The rows in file order.</summary>
    public ImmutableArray<PatternFact> Rows { get; }

    /// <summary>Reads an embedded table.</summary>
    /// <exception cref="FormatException">A pattern or number is malformed.</exception>
    public static PatternTable Load(string name) =>
        new(name, [.. FactTable.Load(name).Facts.Select(fact => new PatternFact(fact, EnvironmentPatternReader.Read(fact.Environment)))]);

    /// <summary>The first row of <paramref name="place"/> that fits at an atom, or null.</summary>
    public Fact? FirstAt(PerceivedMolecule molecule, int atom, string place = "-") =>
        Rows.FirstOrDefault(row => row.Fact.Place == place && row.Pattern.IsAt(molecule, atom))?.Fact;
}

/// <summary>A fact and the pattern that it selects by.</summary>
/// <param name="Fact">The fact.</param>
/// <param name="Pattern">Its environment, read.</param>
internal sealed record PatternFact(Fact Fact, EnvironmentPattern Pattern);
