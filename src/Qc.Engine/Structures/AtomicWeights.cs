using System.Collections.Immutable;
using System.Globalization;
using Qc.Engine.Prediction.Environments;
using Qc.Engine.Values;

namespace Qc.Engine.Structures;

/// <summary>What the table says of an element, or of one isotope of it.</summary>
/// <param name="Symbol">Chemical symbol.</param>
/// <param name="Weight">Atomic weight in g/mol.</param>
/// <param name="Valence">Usual valence, or null.</param>
public sealed record AtomicWeight(string Symbol, Uncertain Weight, int? Valence);

/// <summary>Standard atomic weights (Data/atomic-weights.tsv).</summary>
/// <remarks>
/// The uncertainty takes the IUPAC interval as a rectangular distribution (half width over the root of 3) and adds in quadrature
/// the distance of the conventional value from the middle: the value is not corrected for where in the interval a sample lies.
/// </remarks>
public static class AtomicWeights
{
    private static readonly ImmutableDictionary<(int Number, int Isotope), AtomicWeight> Table =
        TabularResource.Rows("atomic-weights").ToImmutableDictionary(
            row => (Whole(row["number"]), Whole(row["isotope"])),
            row => new AtomicWeight(row["symbol"], WeightOf(row), row["valence"] == "-" ? null : Whole(row["valence"])));

    /// <summary>The row of an element (isotope 0: natural mixture), or null where the table has none.</summary>
    public static AtomicWeight? Find(int atomicNumber, int isotope = 0) => Table.GetValueOrDefault((atomicNumber, isotope));

    private static Uncertain WeightOf(ImmutableDictionary<string, string> row)
    {
        double value = Number(row["value"]);
        double low = Number(row["low"]);
        double high = Number(row["high"]);
        double spread = (high - low) / 2 / Math.Sqrt(3);
        double offset = value - ((low + high) / 2);
        return new Uncertain(value, Math.Sqrt((spread * spread) + (offset * offset)));
    }

    private static double Number(string text) => double.Parse(text, CultureInfo.InvariantCulture);

    private static int Whole(string text) => int.Parse(text, CultureInfo.InvariantCulture);
}
