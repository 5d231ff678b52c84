using System.Text.RegularExpressions;

namespace Qc.Engine.Reading;

/// <summary>Names of nuclei as files spell them ("^1H", "&lt;1H&gt;", "H1", "1 H") to mass number and symbol ("1H").</summary>
internal static partial class NucleusName
{
    public static bool TryParse(string text, out string nucleus)
    {
        nucleus = "";
        if (text.Length > 32)
        {
            return false;
        }

        var plain = string.Concat(text.Where(
            c => !char.IsWhiteSpace(c) && c is not ('^' or '<' or '>' or '{' or '}' or '-' or '"' or '\'')));
        var match = MassFirst().Match(plain);
        match = match.Success ? match : SymbolFirst().Match(plain);
        if (!match.Success)
        {
            return false;
        }

        var symbol = match.Groups["symbol"].Value;
        nucleus = match.Groups["mass"].Value + char.ToUpperInvariant(symbol[0]) + symbol[1..].ToLowerInvariant();
        return true;
    }

    [GeneratedRegex("^(?<mass>[1-9][0-9]{0,2})(?<symbol>[A-Za-z]{1,2})$", RegexOptions.CultureInvariant)]
    private static partial Regex MassFirst();

    [GeneratedRegex("^(?<symbol>[A-Za-z]{1,2})(?<mass>[1-9][0-9]{0,2})$", RegexOptions.CultureInvariant)]
    private static partial Regex SymbolFirst();
}
