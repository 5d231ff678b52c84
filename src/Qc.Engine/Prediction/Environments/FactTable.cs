using System.Collections.Immutable;
using System.Globalization;

namespace Qc.Engine.Prediction.Environments;

/// <summary>One fact of a table.</summary>
/// <param name="Id">Unique in its table, e.g. "sp3/alpha/OCOR".</param>
/// <param name="Place">Where it acts: alpha, ortho, cis ...; "-" where that has no meaning.</param>
/// <param name="Environment">A substituent's name or an <see cref="EnvironmentPattern"/>, as the table says.</param>
/// <param name="Value">ppm or Hz, as the table says.</param>
/// <param name="StandardUncertainty">Of the value as used for other compounds than its own, k = 1.</param>
/// <param name="Source">Key of the source, as in the header of the table.</param>
/// <param name="Trust">V read in the source; R from memory; C computed; ? uncertain.</param>
internal sealed record Fact(
    string Id, string Place, string Environment, double Value, double StandardUncertainty, string Source, string Trust);

/// <summary>A table of facts with the columns id, place, environment, value, uncertainty, source, trust.</summary>
internal sealed class FactTable
{
    private readonly ImmutableDictionary<(string Place, string Environment), Fact> _byEnvironment;

    private FactTable(string name, ImmutableArray<Fact> facts)
    {
        Name = name;
        Facts = facts;
        _byEnvironment = facts.ToImmutableDictionary(fact => (fact.Place, fact.Environment));
    }

    /// <summary>Name of the table's file, without ending.</summary>
    public string Name { get; }

    /// <summary>Its facts in file order.</summary>
    public ImmutableArray<Fact> Facts { get; }

    /// <summary>Reads an embedded table.</summary>
    /// <exception cref="FormatException">A field is not what its column asks for.</exception>
    public static FactTable Load(string name) => new(name, [.. TabularResource.Rows(name).Select(row => new Fact(
        row["id"], row["place"], row["environment"], Number(row["value"]), Number(row["uncertainty"]), row["source"], row["trust"]))]);

    /// <summary>The fact with this place and environment, or null.</summary>
    public Fact? Find(string place, string environment) => _byEnvironment.GetValueOrDefault((place, environment));

    /// <summary>The fact for a substituent, or for the nearest name that stands in for it; null if there is none.</summary>
    public (Fact Fact, bool IsBorrowed)? Find(string place, Substituent substituent)
    {
        foreach (StandIn name in substituent.Names)
        {
            if (Find(place, name.Name) is { } fact)
            {
                return (fact, name.IsBorrowed);
            }
        }

        return null;
    }

    private static double Number(string text) => double.Parse(text, NumberStyles.Float, CultureInfo.InvariantCulture);
}
