using static System.FormattableString;

namespace Qc.Engine.Reading.JcampDx;

/// <summary>The comma lists that declare the columns of NTUPLES; trailing items may be empty.</summary>
internal sealed class NtuplesColumns(JcampHeader header)
{
    private const int MostColumns = 64;

    private readonly string[] _symbols = Items(header, "SYMBOL");

    /// <summary>Position of a symbol, or -1.</summary>
    public int IndexOf(char symbol) => Array.FindIndex(_symbols, s => s.Length == 1 && char.ToUpperInvariant(s[0]) == symbol);

    /// <summary>Text of one item; empty where the list has none.</summary>
    public string Text(string label, int column)
    {
        var items = Items(header, label);
        return column >= 0 && column < items.Length ? items[column] : "";
    }

    /// <summary>A number of one column: null where the item is missing or empty, an error where it cannot be read.</summary>
    public bool TryNumber(string label, int column, out double? value)
    {
        value = null;
        var text = Text(label, column);
        if (!header.IsUnique(label))
        {
            return false;
        }

        if (text.Length == 0)
        {
            return true;
        }

        if (AffnNumber.TryParse(text, out var number))
        {
            value = number;
            return true;
        }

        return header.Log.Fail(
            label,
            header.LineOf(label),
            JcampHeader.NumberExpected(""),
            Invariant($"Item {column + 1}, '{JcampHeader.Shown(text)}', is not a number"));
    }

    /// <summary>The axis that column X declares.</summary>
    public bool TryGetAbscissa(out Abscissa? axis)
    {
        axis = null;
        var log = header.Log;
        var x = IndexOf('X');
        if (x < 0)
        {
            return log.Fail("SYMBOL", header.LineOf("SYMBOL"), "a column X", "The columns of NTUPLES have no abscissa");
        }

        if (!TryNumber("FIRST", x, out var first)
            || !TryNumber("LAST", x, out var last)
            || !TryNumber("FACTOR", x, out var factor)
            || !TryNumber("VARDIM", x, out var points)
            || !header.TryNumber("DELTAX", out double? delta))
        {
            return false;
        }

        if (first is null || last is null || points is null)
        {
            var missing = first is null ? "FIRST" : last is null ? "LAST" : "VARDIM";
            return log.Fail(missing, header.LineOf(missing), "a number for column X", "The axis is not complete");
        }

        if (!PointCount.TryGet(points.Value, "VARDIM", header.LineOf("VARDIM"), log, out var count))
        {
            return false;
        }

        delta ??= StepFromFactor(first.Value, last.Value, factor, count);
        var units = JcampHeader.Compact(Text("UNITS", x));
        axis = new Abscissa(
            first.Value, last.Value, delta, factor ?? 1, count, units, "VARDIM", header.LineOf("VARDIM"));
        return true;
    }

    // Writers of integer X columns put the step into FACTOR; where it divides the axis into about as many whole steps as there
    // are points (or half, where both parts were counted) it is one.
    private static double? StepFromFactor(double first, double last, double? factor, int points)
    {
        var steps = Math.Abs((last - first) / (factor ?? 0));
        var isStep = steps <= points + 1 && steps >= (points / 2.0) - 1 && Math.Abs(steps - Math.Round(steps)) < 0.01;
        return isStep ? Math.CopySign(factor!.Value, last - first) : null;
    }

    private static string[] Items(JcampHeader header, string label) =>
        header.Text(label).Split(',', MostColumns, StringSplitOptions.TrimEntries);
}
