using System.Collections.Immutable;
using System.Globalization;

namespace Qc.Service.Demo;

/// <summary>One site of a demo substance.</summary>
internal sealed record DemoSite(
    string Name, double Ppm, int Protons, double ExtraWidthHertz, ImmutableArray<(string Partner, double Hertz)> Couplings);

/// <summary>The spin systems of demo-substances.tsv.</summary>
internal static class DemoSubstances
{
    private static readonly ImmutableArray<string[]> Rows = Read();

    /// <summary>Sites of a substance in a solvent.</summary>
    /// <exception cref="ArgumentException">The table has no such substance.</exception>
    public static ImmutableArray<DemoSite> Sites(string substance, string solvent)
    {
        ImmutableArray<DemoSite> sites = [.. Rows.Where(r => r[0] == substance && r[1] == solvent).Select(Site)];
        return sites.IsEmpty ? throw new ArgumentException($"demo-substances.tsv has no {substance} in {solvent}.", nameof(substance)) : sites;
    }

    private static DemoSite Site(string[] row) => new(
        row[2],
        Number(row[3]),
        int.Parse(row[4], CultureInfo.InvariantCulture),
        Number(row[5]),
        [
            .. row[6].Split(';', StringSplitOptions.RemoveEmptyEntries)
                .Select(c => c.Split(':'))
                .Select(c => (c[0], Number(c[1]))),
        ]);

    private static double Number(string text) => double.Parse(text, NumberStyles.Float, CultureInfo.InvariantCulture);

    private static ImmutableArray<string[]> Read()
    {
        using Stream stream = typeof(DemoSubstances).Assembly.GetManifestResourceStream("Qc.Service.Demo.demo-substances.tsv")
            ?? throw new InvalidOperationException("demo-substances.tsv is not embedded in the service.");
        using var reader = new StreamReader(stream);
        return
        [
            .. reader.ReadToEnd().Split('\n', StringSplitOptions.RemoveEmptyEntries)
                .Select(l => l.TrimEnd('\r'))
                .Where(l => l.Length > 0 && l[0] != '#')
                .Skip(1)
                .Select(l => l.Split('\t')),
        ];
    }
}
