using System.Collections.Immutable;

namespace Qc.Engine.Prediction.Environments;

/// <summary>A substituent by name, and the more general names that stand in for it where a table has no row of its own.</summary>
/// <param name="Name">Its name in the vocabulary.</param>
/// <param name="Names">The name itself and its stand-ins, nearest first.</param>
internal sealed record Substituent(string Name, ImmutableArray<StandIn> Names)
{
    /// <summary>What hangs on a bond that the vocabulary does not know.</summary>
    public static readonly Substituent Unknown = new("?", []);

    /// <summary>Whether it is, or belongs to the class of, <paramref name="name"/>.</summary>
    public bool Is(string name) => Names.Any(standIn => !standIn.IsBorrowed && standIn.Name == name);
}

/// <summary>A name under which a substituent can be looked up.</summary>
/// <param name="Name">The name.</param>
/// <param name="IsBorrowed">Whether it is only the nearest thing in the tables, and not the class that the substituent belongs to.</param>
internal readonly record struct StandIn(string Name, bool IsBorrowed);

/// <summary>The one place that says what hangs on an atom: Data/substituents.tsv, first fitting pattern wins.</summary>
internal static class SubstituentVocabulary
{
    private const string PatternSeparator = " | ";
    private const string NamePlace = "name";
    private static readonly ImmutableArray<Entry> Entries = Load();
    private static readonly ImmutableHashSet<string> Known = [.. Entries.SelectMany(entry => entry.Substituent.Names).Select(name => name.Name)];

    /// <summary>Whether the vocabulary has the name, for a substituent or a class.</summary>
    public static bool Knows(string name) => Known.Contains(name);

    /// <summary>Names what hangs at <paramref name="root"/>, seen from <paramref name="from"/>.</summary>
    public static Substituent Name(PerceivedMolecule molecule, int from, int root)
    {
        foreach (Entry entry in Entries)
        {
            if (entry.Patterns.Any(pattern => pattern.IsAt(molecule, root, from)))
            {
                return entry.Substituent;
            }
        }

        return Substituent.Unknown;
    }

    private static ImmutableArray<Entry> Load()
    {
        ImmutableArray<ImmutableDictionary<string, string>> rows = TabularResource.Rows("substituents");
        ImmutableDictionary<string, string> standIns = rows.ToImmutableDictionary(row => row[NamePlace], row => row["stand-in"]);
        return
        [
            .. rows.Select(row => new Entry(
                new Substituent(row[NamePlace], Names(row[NamePlace], standIns)),
                [.. row["patterns"].Split(PatternSeparator).Where(text => text != "-").Select(EnvironmentPatternReader.Read)])),
        ];
    }

    private static ImmutableArray<StandIn> Names(string name, ImmutableDictionary<string, string> standIns)
    {
        var names = ImmutableArray.CreateBuilder<StandIn>();
        bool borrowed = false;
        for (string next = name; next != "-"; next = standIns[names[^1].Name])
        {
            borrowed |= next[0] == '~';
            names.Add(new StandIn(next.TrimStart('~'), borrowed));
        }

        return names.ToImmutable();
    }

    private sealed record Entry(Substituent Substituent, ImmutableArray<EnvironmentPattern> Patterns);
}
