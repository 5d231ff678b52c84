using System.Collections.Immutable;

namespace Qc.Engine.Prediction.Environments;

/// <summary>Reads an embedded table of Data/: tab-separated, a header line, "#" lines are comments.</summary>
internal static class TabularResource
{
    /// <summary>The rows of Data/<paramref name="name"/>.tsv, fields by column.</summary>
    /// <exception cref="FormatException">The table is missing, or a row has another number of fields than the header.</exception>
    public static ImmutableArray<ImmutableDictionary<string, string>> Rows(string name)
    {
        using Stream stream = typeof(TabularResource).Assembly.GetManifestResourceStream($"Qc.Engine.Data.{name}.tsv")
            ?? throw new FormatException($"There is no table '{name}'.");
        using var reader = new StreamReader(stream);
        string[] lines = [.. reader.ReadToEnd().Split('\n').Select(line => line.TrimEnd('\r')).Where(line => line.Length > 0 && line[0] != '#')];
        string[] columns = lines[0].Split('\t');
        return
        [
            .. lines.Skip(1).Select(line =>
            {
                string[] fields = line.Split('\t');
                return fields.Length == columns.Length
                    ? columns.Zip(fields).ToImmutableDictionary(pair => pair.First, pair => pair.Second)
                    : throw new FormatException($"Table '{name}': '{line}' has {fields.Length} fields, not {columns.Length}.");
            }),
        ];
    }
}
