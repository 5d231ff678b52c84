using System.Globalization;

namespace Qc.Engine.Tests;

/// <summary>Published figures under tests/reference, each file with its origin in its head.</summary>
internal static class ReferenceFile
{
    /// <summary>The repository's root, found by its solution file.</summary>
    public static string Root { get; } = FindRoot();

    /// <summary>Rows of a tab-separated reference file by column name; lines that begin with # are its head.</summary>
    public static IEnumerable<IReadOnlyDictionary<string, string>> Rows(string name)
    {
        string[] lines = [.. File.ReadLines(Path.Combine(Root, "tests", "reference", name)).Where(l => l.Length > 0 && l[0] != '#')];
        string[] header = lines[0].Split('\t');
        foreach (string line in lines.Skip(1))
        {
            string[] cells = line.Split('\t');
            yield return header.Select((h, i) => (h, i)).ToDictionary(p => p.h, p => cells[p.i], StringComparer.Ordinal);
        }
    }

    /// <summary>A number of a row.</summary>
    public static double Number(this IReadOnlyDictionary<string, string> row, string column) =>
        double.Parse(row[column], NumberStyles.Float, CultureInfo.InvariantCulture);

    private static string FindRoot()
    {
        DirectoryInfo? folder = new(AppContext.BaseDirectory);
        while (folder is not null && !File.Exists(Path.Combine(folder.FullName, "Qc.sln")))
        {
            folder = folder.Parent;
        }

        return folder?.FullName ?? throw new InvalidOperationException("Qc.sln was not found above the tests.");
    }
}
