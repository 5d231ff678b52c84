using System.Globalization;
using System.Text.RegularExpressions;

namespace Qc.Chemistry.Toolkit;

/// <summary>Turns what the toolkit logs about a text it cannot read into one plain sentence and a position.</summary>
internal static partial class LogReader
{
    /// <summary>The error told by a log; an unknown log gives a general sentence.</summary>
    public static StructureError ErrorOf(string log)
    {
        if (ValencePattern().Match(log) is { Success: true } valence)
        {
            string atom = PeopleNumber(valence.Groups["atom"].Value);
            return new StructureError(
                $"Atom {atom} ({valence.Groups["symbol"].Value}) has valence {valence.Groups["valence"].Value}, more than it can have.",
                null);
        }

        int? position = PositionPattern().Match(log) is { Success: true } place
            ? int.Parse(place.Groups["position"].Value, CultureInfo.InvariantCulture)
            : null;
        int? line = LinePattern().Match(log) is { Success: true } row
            ? int.Parse(row.Groups["line"].Value, CultureInfo.InvariantCulture)
            : null;
        string message = log switch
        {
            _ when log.Contains("unclosed ring", StringComparison.OrdinalIgnoreCase) => "A ring is opened and not closed.",
            _ when log.Contains("extra close parentheses", StringComparison.OrdinalIgnoreCase) => "A branch is closed that was not opened.",
            _ when log.Contains("extra open parentheses", StringComparison.OrdinalIgnoreCase) => "A branch is opened and not closed.",
            _ when log.Contains("kekulize", StringComparison.OrdinalIgnoreCase) => "No arrangement of double bonds fits the aromatic atoms.",
            _ when log.Contains("non-ring atom", StringComparison.OrdinalIgnoreCase) => "An atom outside a ring is written as aromatic.",
            _ when log.Contains("syntax error", StringComparison.OrdinalIgnoreCase) => "This is not SMILES.",
            _ => "The structure toolkit cannot read this structure.",
        };
        return new StructureError(message, position ?? line);
    }

    private static string PeopleNumber(string zeroBased) =>
        (int.Parse(zeroBased, CultureInfo.InvariantCulture) + 1).ToString(CultureInfo.InvariantCulture);

    [GeneratedRegex(@"Explicit valence for atom # (?<atom>\d+) (?<symbol>\w+), (?<valence>\d+),")]
    private static partial Regex ValencePattern();

    [GeneratedRegex(@"around position (?<position>\d+)")]
    private static partial Regex PositionPattern();

    [GeneratedRegex(@"on line (?<line>\d+)", RegexOptions.IgnoreCase)]
    private static partial Regex LinePattern();
}
