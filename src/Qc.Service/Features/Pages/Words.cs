using System.Collections.Immutable;
using System.Globalization;
using System.Reflection;
using Qc.Engine.Prediction;
using Qc.Engine.Values;
using Qc.Engine.Verdicts;

namespace Qc.Service.Features.Pages;

/// <summary>How the pages write numbers, times, people and states.</summary>
public static class Words
{
    /// <summary>Appended to the addresses of built files, so that a browser takes the new ones after an update.</summary>
    public static string BuiltVersion { get; } =
        typeof(Words).Assembly.GetCustomAttribute<AssemblyInformationalVersionAttribute>()?.InformationalVersion ?? "0";

    /// <summary>The standing caution.</summary>
    public const string Caution =
        "Proton NMR does not see inorganic salts, metals, water below its detection limit or substances under another signal. "
        + "A verdict supports, and does not replace, the decision of the quality unit and of licensed persons.";

    /// <summary>A number with so many decimals, its minus sign as printed; what rounds to zero has none.</summary>
    public static string Number(double value, int decimals)
    {
        string digits = Math.Abs(value).ToString($"F{decimals}", CultureInfo.InvariantCulture);
        return value < 0 && digits.Any(c => c is >= '1' and <= '9') ? $"−{digits}" : digits;
    }

    /// <summary>A number with the decimals its unit deserves, and the unit.</summary>
    public static string Measure(double value, string unit) => $"{Figure(value, unit)} {unit}".TrimEnd();

    /// <summary>The same without the unit.</summary>
    public static string Figure(double value, string unit) => unit switch
    {
        "ppm" => Number(value, 3),
        "Hz" or "H" or "mol %" or "% (m/m)" => Number(value, 2),
        _ when Math.Abs(value) >= 1000 => Number(value, 0),
        _ => value.ToString("0.####", CultureInfo.InvariantCulture),
    };

    /// <summary>"99.41 ± 0.60": the uncertainty with two significant digits, the value with as many decimals.</summary>
    public static string WithUncertainty(double value, double expanded)
    {
        int decimals = expanded > 0 ? Math.Clamp(1 - (int)Math.Floor(Math.Log10(expanded)), 0, 8) : 2;
        return $"{Number(value, decimals)} ± {Number(expanded, decimals)}";
    }

    /// <summary>What was observed, as "4.093 ppm (u = 0.002)"; empty where nothing was.</summary>
    public static string Observed(Finding finding) => finding.Observed is { } observed
        ? Measure(observed, finding.Unit) + (finding.StandardUncertainty is { } u ? $" (u = {Figure(u, finding.Unit)})" : "")
        : "";

    /// <summary>The limit in words; empty where there is none.</summary>
    public static string Limit(Finding finding) => (finding.Low, finding.High) switch
    {
        ({ } low, { } high) => $"{Figure(low, finding.Unit)} to {Measure(high, finding.Unit)}",
        ({ } low, null) => $"at least {Measure(low, finding.Unit)}",
        (null, { } high) => $"at most {Measure(high, finding.Unit)}",
        _ => "",
    };

    /// <summary>Regions as the browser modules read them: "4.05,4.13;2.00,2.10".</summary>
    public static string Regions(ImmutableArray<Interval> regions) => regions.IsDefaultOrEmpty
        ? ""
        : string.Join(';', regions.Select(r => string.Create(CultureInfo.InvariantCulture, $"{r.Low:0.#####},{r.High:0.#####}")));

    /// <summary>The same for one region.</summary>
    public static string Regions(double low, double high) => Regions([new Interval(low, high)]);

    /// <summary>Time in UTC, to the minute.</summary>
    public static string Time(DateTimeOffset at) => at.UtcDateTime.ToString("yyyy-MM-dd HH:mm 'UTC'", CultureInfo.InvariantCulture);

    /// <summary>Time in UTC, to the second, for signatures.</summary>
    public static string ExactTime(DateTimeOffset at) => at.UtcDateTime.ToString("yyyy-MM-dd HH:mm:ss 'UTC'", CultureInfo.InvariantCulture);

    /// <summary>How long ago, in the coarsest unit that says something.</summary>
    public static string Age(TimeSpan age) => age switch
    {
        { TotalMinutes: < 1 } => "just now",
        { TotalHours: < 1 } => Count((int)age.TotalMinutes, "minute"),
        { TotalDays: < 2 } => Count((int)age.TotalHours, "hour"),
        _ => Count((int)age.TotalDays, "day"),
    };

    /// <summary>"1 lot", "2 lots".</summary>
    public static string Count(int count, string noun) =>
        $"{count.ToString(CultureInfo.InvariantCulture)} {noun}{(count == 1 ? "" : "s")}";

    /// <summary>Who, from "person:{user}", "key:{id}" or "service".</summary>
    public static string By(string by) => by.Split(':', 2) switch
    {
        ["person", { } user] => user,
        ["key", { } id] => $"LIMS key {id}",
        _ => "the service",
    };

    /// <summary>A lot's number with the measurement it stands for.</summary>
    public static string Lot(string number, int sequence) =>
        sequence == 1 ? number : string.Create(CultureInfo.InvariantCulture, $"{number}, measurement {sequence}");

    /// <summary>A state as a sentence's predicate.</summary>
    public static string State(string state) => state switch
    {
        "queued" => "waiting for its check",
        "checking" => "being checked",
        "checked" => "checked, waiting for a decision",
        "unreadable" => "unreadable, waiting for a decision",
        "reviewed" => "reviewed",
        "released" => "released",
        "rejected" => "rejected",
        "remeasure" => "to be measured again",
        _ => state,
    };

    /// <summary>A state as something that happened.</summary>
    public static string Happened(string state) => state switch
    {
        "queued" => "Received",
        "checking" => "Check begun",
        "checked" => "Checked",
        "unreadable" => "Found unreadable",
        "reviewed" => "Reviewed",
        "released" => "Released",
        "rejected" => "Rejected",
        "remeasure" => "Re-measurement asked for",
        _ => state,
    };

    /// <summary>A review's decision.</summary>
    public static string Decision(string decision) => decision switch
    {
        "release" => "Released",
        "reject" => "Rejected",
        "remeasure" => "Re-measurement asked for",
        _ => decision,
    };

    /// <summary>What an expected shift rests on.</summary>
    public static string Rests(Basis basis) => basis switch
    {
        Basis.Increments => "published increments",
        Basis.Library => "own assignments",
        Basis.Reference => "reference lot",
        _ => "not covered by the tables: a wide interval",
    };

    /// <summary>Splitting with couplings: "t, 6.7 Hz".</summary>
    public static string Splitting(LedgerLine line) => line.CouplingsHz.IsDefaultOrEmpty
        ? line.Splitting
        : $"{line.Splitting}, {string.Join(", ", line.CouplingsHz.Select(j => Number(Math.Abs(j), 1)))} Hz";
}
