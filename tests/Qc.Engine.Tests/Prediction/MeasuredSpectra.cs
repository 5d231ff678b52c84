using System.Collections.Immutable;
using System.Globalization;

namespace Qc.Engine.Tests.Prediction;

/// <summary>A measured signal of protons on carbon.</summary>
public sealed record MeasuredSignal(double ShiftPpm, string Multiplicity, ImmutableArray<double> CouplingsHertz, int Protons, string Label);

/// <summary>One row of tests/reference/molecules.txt or molecules-recalled.txt.</summary>
public sealed record MeasuredSpectrum(int Row, string Id, string Name, string Smiles, string Solvent, ImmutableArray<MeasuredSignal> Signals)
{
    /// <summary>The rule by which the rows are split: odd rows set the uncertainty model, even rows check it.</summary>
    public bool IsForFit => Row % 2 == 1;
}

/// <summary>Reads the measured spectra of tests/reference.</summary>
public static class MeasuredSpectra
{
    /// <summary>Ids of rows whose substance is itself a row of a prediction table; they check nothing and are counted apart.</summary>
    public static readonly ImmutableHashSet<string> InTables =
        [.. File.ReadLines(PathOf("molecules-in-tables.txt")).Where(line => line.Length > 0 && line[0] != '#').Select(line => line.Split('|')[0])];

    /// <summary>All rows, file by file.</summary>
    public static readonly ImmutableArray<MeasuredSpectrum> All = [.. Read("molecules.txt"), .. Read("molecules-recalled.txt")];

    /// <summary>A file of tests/reference.</summary>
    public static string PathOf(string file)
    {
        string? folder = AppContext.BaseDirectory;
        while (folder is not null && !File.Exists(Path.Combine(folder, "Qc.sln")))
        {
            folder = Path.GetDirectoryName(folder);
        }

        return Path.Combine(folder ?? throw new FileNotFoundException("The root of the repository was not found."), "tests", "reference", file);
    }

    private static IEnumerable<MeasuredSpectrum> Read(string file)
    {
        int row = 0;
        foreach (string line in File.ReadLines(PathOf(file)).Where(line => line.Length > 0 && line[0] != '#'))
        {
            string[] fields = line.Split('|');
            row++;
            yield return new MeasuredSpectrum(
                row, fields[0], fields[1], fields[2], fields[3], [.. fields[6].Split(';').Select(Signal).OfType<MeasuredSignal>()]);
        }
    }

    private static MeasuredSignal? Signal(string text)
    {
        string[] fields = text.Split(' ', 5, StringSplitOptions.RemoveEmptyEntries | StringSplitOptions.TrimEntries);
        bool exchanges = fields[4].TrimEnd('~').EndsWith('x');
        return exchanges ? null : new MeasuredSignal(
            Number(fields[0]),
            fields[1],
            fields[2] == "-" ? [] : [.. fields[2].Split(',').Select(Number)],
            int.Parse(fields[3], CultureInfo.InvariantCulture),
            fields[4]);
    }

    private static double Number(string text) => double.Parse(text, NumberStyles.Float, CultureInfo.InvariantCulture);
}
