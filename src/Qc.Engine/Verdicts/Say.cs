using System.Globalization;
using Qc.Engine.Structures;
using Qc.Engine.Values;

namespace Qc.Engine.Verdicts;

/// <summary>Numbers and places as the sentences of findings write them.</summary>
internal static class Say
{
    public static string Ppm(double ppm) => ppm.ToString("0.000", CultureInfo.InvariantCulture);

    public static string Coarse(double value) => value.ToString("0.00", CultureInfo.InvariantCulture);

    public static string Tenth(double value) => value.ToString("0.0", CultureInfo.InvariantCulture);

    public static string Whole(double value) => value.ToString("0", CultureInfo.InvariantCulture);

    public static string Region(Interval region) => $"{Coarse(region.High)} to {Coarse(region.Low)} ppm";

    public static string Protons(double count) =>
        count == 1 ? "1 proton" : $"{count.ToString("0.##", CultureInfo.InvariantCulture)} protons";

    /// <summary>"H-4 (2 protons)".</summary>
    public static string Group(ProtonGroup group) => $"{group.Name} ({Protons(group.Count)})";
}
