using System.Collections.Immutable;
using System.Globalization;

namespace Qc.Engine.Data;

/// <summary>One signal of a substance in a solvent, as a row of substances.tsv states it.</summary>
/// <param name="Substance">Name.</param>
/// <param name="Role">"solvent", "water", "reference" or "impurity".</param>
/// <param name="Solvent">Deuterated solvent.</param>
/// <param name="Signal">Which of its signals.</param>
/// <param name="ShiftPpm">Position.</param>
/// <param name="Protons">Protons behind it.</param>
/// <param name="Multiplicity">s, d, t, q, sept, m, br, quint-D or trip-D.</param>
/// <param name="Hertz">Coupling in Hz, 0 where it has none.</param>
/// <param name="Exchangeable">Whether its protons exchange.</param>
public sealed record SubstanceSignal(
    string Substance, string Role, string Solvent, string Signal, double ShiftPpm, double Protons, string Multiplicity, double Hertz, bool Exchangeable);

/// <summary>Residual solvents, water, references and common impurities (Data/substances.tsv). Rows marked as misprints are left out.</summary>
public static class SubstanceTable
{
    private static readonly Lazy<ImmutableArray<SubstanceSignal>> Rows = new(Read);

    private static readonly Dictionary<string, string> Labels = new(StringComparer.Ordinal)
    {
        ["CDCL3"] = "CDCl3", ["CHLOROFORM"] = "CDCl3", ["CHLOROFORMD"] = "CDCl3", ["CHLOROFORMD1"] = "CDCl3", ["CHCL3"] = "CDCl3",
        ["DMSO"] = "DMSO-d6", ["DMSOD6"] = "DMSO-d6", ["D6DMSO"] = "DMSO-d6", ["CD3SOCD3"] = "DMSO-d6", ["CD32SO"] = "DMSO-d6", ["C2D6OS"] = "DMSO-d6",
        ["DIMETHYLSULFOXIDED6"] = "DMSO-d6",
        ["MEOD"] = "CD3OD", ["CD3OD"] = "CD3OD", ["METHANOLD4"] = "CD3OD", ["METHANOL"] = "CD3OD", ["MEOHD4"] = "CD3OD",
        ["D2O"] = "D2O", ["H2O+D2O"] = "D2O", ["WATER"] = "D2O", ["DEUTERIUMOXIDE"] = "D2O",
        ["ACETONE"] = "acetone-d6", ["ACETONED6"] = "acetone-d6", ["CD3COCD3"] = "acetone-d6", ["CD32CO"] = "acetone-d6",
        ["CD3CN"] = "CD3CN", ["ACETONITRILED3"] = "CD3CN", ["ACETONITRILE"] = "CD3CN",
        ["C6D6"] = "C6D6", ["BENZENED6"] = "C6D6", ["BENZENE"] = "C6D6",
        ["CD2CL2"] = "CD2Cl2", ["DICHLOROMETHANED2"] = "CD2Cl2", ["CH2CL2"] = "CD2Cl2",
        ["THF"] = "THF-d8", ["THFD8"] = "THF-d8", ["C4D8O"] = "THF-d8",
        ["TOLUENE"] = "toluene-d8", ["TOLUENED8"] = "toluene-d8", ["C7D8"] = "toluene-d8", ["TOL"] = "toluene-d8",
    };

    /// <summary>Solvents that have rows.</summary>
    public static ImmutableArray<string> Solvents => [.. Rows.Value.Select(r => r.Solvent).Distinct()];

    /// <summary>Our name of a solvent label as headers write it; null where it is not known.</summary>
    public static string? Normalise(string? label)
    {
        if (label is null)
        {
            return null;
        }

        string key = new([.. label.ToUpperInvariant().Where(c => char.IsAsciiLetterOrDigit(c) || c == '+')]);
        return Labels.GetValueOrDefault(key);
    }

    /// <summary>All signals in a solvent; empty where the solvent has no rows.</summary>
    public static ImmutableArray<SubstanceSignal> In(string solvent) => [.. Rows.Value.Where(r => r.Solvent == solvent)];

    private static ImmutableArray<SubstanceSignal> Read()
    {
        using Stream stream = typeof(SubstanceTable).Assembly.GetManifestResourceStream("Qc.Engine.Data.substances.tsv")
            ?? throw new InvalidOperationException("substances.tsv is not embedded in the engine.");
        using var reader = new StreamReader(stream);
        var rows = ImmutableArray.CreateBuilder<SubstanceSignal>();
        bool header = true;
        while (reader.ReadLine() is { } line)
        {
            if (line.Length == 0 || line[0] == '#')
            {
                continue;
            }

            string[] cells = line.Split('\t');
            if (!header && cells[10] != "misprint")
            {
                rows.Add(new SubstanceSignal(
                    cells[0], cells[1], cells[2], cells[3], Number(cells[4]), Number(cells[5]), cells[6], Number(cells[7]), cells[8] == "yes"));
            }

            header = false;
        }

        return rows.ToImmutable();
    }

    private static double Number(string text) => double.Parse(text, NumberStyles.Float, CultureInfo.InvariantCulture);
}
