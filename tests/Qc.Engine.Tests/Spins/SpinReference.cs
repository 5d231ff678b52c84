using System.Collections.Immutable;
using System.Globalization;
using Qc.Engine.Spins;

namespace Qc.Engine.Tests.Spins;

/// <summary>The systems and lines of <c>tests/reference/spin-*.tsv</c>.</summary>
internal static class SpinReference
{
    internal sealed record Line(double Frequency, double Intensity, double FrequencyTolerance, double IntensityTolerance);

    public static IEnumerable<string> Cases => Rows("spin-systems.tsv").Select(r => r[0]);

    public static SpinSystem System(string name)
    {
        string[] row = Rows("spin-systems.tsv").Single(r => r[0] == name);
        ImmutableArray<SpinSite> sites = [.. row[1].Split(';').Select(s => s.Split('x'))
            .Select(s => new SpinSite(Number(s[0]), int.Parse(s[1], CultureInfo.InvariantCulture)))];
        ImmutableArray<SpinCoupling> couplings = [.. row[2].Split(';').Select(c => c.Split('-', ':'))
            .Select(c => new SpinCoupling(
                int.Parse(c[0], CultureInfo.InvariantCulture), int.Parse(c[1], CultureInfo.InvariantCulture), Number(c[2])))];
        return new SpinSystem(sites, couplings);
    }

    public static Line[] Lines(string name) =>
        [.. Rows("spin-lines.tsv").Where(r => r[0] == name)
            .Select(r => new Line(Number(r[1]), Number(r[2]), Number(r[3]), Number(r[4])))];

    private static double Number(string text) => double.Parse(text, NumberStyles.Float, CultureInfo.InvariantCulture);

    private static IEnumerable<string[]> Rows(string file)
    {
        using Stream stream = typeof(SpinReference).Assembly.GetManifestResourceStream("reference." + file)!;
        using var reader = new StreamReader(stream);
        return [.. reader.ReadToEnd().Split('\n', StringSplitOptions.RemoveEmptyEntries).Skip(1).Select(l => l.Split('\t'))];
    }
}
