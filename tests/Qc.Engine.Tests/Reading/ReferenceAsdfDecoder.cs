using System.Globalization;
using System.Text.RegularExpressions;

namespace Qc.Engine.Tests.Reading;

/// <summary>The slow, obvious twin of the ASDF decoder: one regular expression, one token at a time.</summary>
internal static partial class ReferenceAsdfDecoder
{
    public static List<double> Decode(string table)
    {
        var values = new List<double>();
        var endedInDifference = false;
        foreach (var line in table.Split('\n', StringSplitOptions.RemoveEmptyEntries))
        {
            var tokens = Token().Matches(line).Select(m => m.Value).Skip(1).ToList();
            var isCheck = endedInDifference;
            double? difference = null;
            foreach (var token in tokens)
            {
                var (kind, value) = Value(token);
                switch (kind)
                {
                    case 'D':
                        difference = value;
                        values.Add(values[^1] + value);
                        break;
                    case 'U':
                        values.AddRange(Enumerable.Range(1, (int)value - 1).Select(i => values[^1] + ((difference ?? 0) * i)).ToList());
                        break;
                    default:
                        if (!isCheck)
                        {
                            values.Add(value);
                        }

                        (isCheck, difference) = (false, null);
                        break;
                }
            }

            endedInDifference = difference is not null;
        }

        return values;
    }

    private static (char Kind, double Value) Value(string token)
    {
        foreach (var (digits, kind, sign) in (ReadOnlySpan<(string, char, string)>)
            [("@ABCDEFGHI", 'A', ""), (" abcdefghi", 'A', "-"), ("%JKLMNOPQR", 'D', ""), (" jklmnopqr", 'D', "-"), (" STUVWXYZs", 'U', "")])
        {
            if (digits.IndexOf(token[0], StringComparison.Ordinal) is >= 0 and var digit)
            {
                return (kind, double.Parse(sign + digit.ToString(CultureInfo.InvariantCulture) + token[1..], CultureInfo.InvariantCulture));
            }
        }

        return ('A', double.Parse(token, CultureInfo.InvariantCulture));
    }

    [GeneratedRegex(@"[-+]?[0-9]+|[@A-Z%a-s][0-9]*")]
    private static partial Regex Token();
}
