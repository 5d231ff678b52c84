using System.Collections.Immutable;
using System.Text;

namespace Qc.Engine.Reading.JcampDx;

/// <summary>The labels of one block, by name. A label that is used must not be there twice with different values.</summary>
internal sealed class JcampHeader
{
    private readonly Dictionary<string, (string Text, int Line)> _values = new(StringComparer.Ordinal);
    private readonly Dictionary<string, int> _contradicted = new(StringComparer.Ordinal);

    public JcampHeader(ReadOnlySpan<byte> content, Encoding encoding, IEnumerable<JcampRecord> records, ReadingLog log)
    {
        Log = log;
        foreach (var record in records)
        {
            if (record.Label.Length == 0)
            {
                continue;
            }

            var text = JcampText.Value(content, record, encoding);
            if (!_values.TryAdd(record.Label, (text, record.Line)) && _values[record.Label].Text != text)
            {
                _contradicted.TryAdd(record.Label, record.Line);
            }
        }
    }

    public ReadingLog Log { get; }

    /// <summary>All labels as read.</summary>
    public ImmutableSortedDictionary<string, string> Labels =>
        _values.ToImmutableSortedDictionary(pair => pair.Key, pair => pair.Value.Text, StringComparer.Ordinal);

    public bool Has(string label) => _values.TryGetValue(label, out var value) && value.Text.Length > 0;

    public int LineOf(string label) => _values.TryGetValue(label, out var value) ? value.Line : 0;

    /// <summary>The first value of a label; empty where there is none.</summary>
    public string Text(string label) => _values.TryGetValue(label, out var value) ? value.Text : "";

    /// <summary>The value in upper case without blanks.</summary>
    public string Keyword(string label) => Compact(Text(label));

    public static string Compact(string text) =>
        string.Concat(text.Where(c => !char.IsWhiteSpace(c))).ToUpperInvariant();

    /// <summary>False, with an error, where a label that is needed says two different things.</summary>
    public bool IsUnique(string label) =>
        !_contradicted.TryGetValue(label, out var line)
        || Log.Fail(label, line, $"one value for ##{label}=", "The label is given twice with different values");

    /// <summary>A number that the axis or the ordinates depend on: null where absent, an error where it cannot be read.</summary>
    public bool TryNumber(string label, out double? value)
    {
        value = null;
        if (!Has(label))
        {
            return true;
        }

        if (!IsUnique(label))
        {
            return false;
        }

        if (AffnNumber.TryParse(Text(label), out var number))
        {
            value = number;
            return true;
        }

        return Log.Fail(label, LineOf(label), NumberExpected(Text(label)), $"'{Shown(Text(label))}' is not a number");
    }

    /// <summary>As <see cref="TryNumber(string, out double?)"/>, but the label must be there.</summary>
    public bool TryNumber(string label, out double value)
    {
        value = 0;
        if (!TryNumber(label, out double? number))
        {
            return false;
        }

        if (number is null)
        {
            return Log.Fail(label, 0, $"##{label}= with a number", "The label is missing");
        }

        value = number.Value;
        return true;
    }

    /// <summary>A number nothing else depends on: what cannot be read is a departure.</summary>
    public double? Fact(string label)
    {
        if (!Has(label))
        {
            return null;
        }

        var first = Text(label).Split((char[])[' ', '\t', '\n'], 2)[0];
        if (AffnNumber.TryParse(first, out var number))
        {
            return number;
        }

        Log.Warn(label, LineOf(label), $"'{Shown(Text(label))}' is not a number and was passed over");
        return null;
    }

    /// <summary>What to ask for where a number could not be read.</summary>
    public static string NumberExpected(string text) =>
        text.Contains(',', StringComparison.Ordinal)
            ? "a number with a decimal point; decimal commas are not read"
            : "a number with a decimal point";

    /// <summary>The start of a value, short enough for a message.</summary>
    public static string Shown(string text)
    {
        var line = text.Split('\n')[0];
        return line.Length <= 40 ? line : line[..40] + "...";
    }
}
