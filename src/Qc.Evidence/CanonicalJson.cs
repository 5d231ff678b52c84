using System.Globalization;
using System.Text;
using System.Text.Json;

namespace Qc.Evidence;

/// <summary>
/// One byte string for one JSON value: the JSON Canonicalization Scheme of RFC 8785. No white space; members sorted by the
/// UTF-16 code units of their names; strings with the shortest escapes; numbers as ECMAScript prints an IEEE 754 double.
/// What is hashed or signed is always written this way.
/// </summary>
public static class CanonicalJson
{
    /// <summary>Canonical bytes of a JSON text.</summary>
    /// <exception cref="JsonException">The text is not JSON.</exception>
    /// <exception cref="NotSupportedException">An object has two members of the same name, or a number is beyond a double.</exception>
    public static byte[] Of(string json)
    {
        using JsonDocument document = JsonDocument.Parse(json);
        return Of(document.RootElement);
    }

    /// <summary>Canonical bytes of a JSON value.</summary>
    public static byte[] Of(JsonElement element)
    {
        var text = new StringBuilder();
        Write(element, text);
        return Encoding.UTF8.GetBytes(text.ToString());
    }

    /// <summary>Canonical bytes of an object, serialised with the given options.</summary>
    public static byte[] Of<T>(T value, JsonSerializerOptions? options = null) =>
        Of(JsonSerializer.SerializeToElement(value, options));

    private static void Write(JsonElement element, StringBuilder text)
    {
        switch (element.ValueKind)
        {
            case JsonValueKind.Object:
                WriteObject(element, text);
                break;
            case JsonValueKind.Array:
                text.Append('[');
                bool first = true;
                foreach (JsonElement item in element.EnumerateArray())
                {
                    text.Append(first ? "" : ",");
                    first = false;
                    Write(item, text);
                }

                text.Append(']');
                break;
            case JsonValueKind.String:
                WriteString(element.GetString()!, text);
                break;
            case JsonValueKind.Number:
                text.Append(Number(element.GetDouble()));
                break;
            case JsonValueKind.True:
                text.Append("true");
                break;
            case JsonValueKind.False:
                text.Append("false");
                break;
            default:
                text.Append("null");
                break;
        }
    }

    private static void WriteObject(JsonElement element, StringBuilder text)
    {
        JsonProperty[] members = [.. element.EnumerateObject()];
        Array.Sort(members, (a, b) => string.CompareOrdinal(a.Name, b.Name));
        text.Append('{');
        for (int i = 0; i < members.Length; i++)
        {
            if (i > 0 && members[i].Name == members[i - 1].Name)
            {
                throw new NotSupportedException($"The member \"{members[i].Name}\" occurs twice.");
            }

            text.Append(i > 0 ? "," : "");
            WriteString(members[i].Name, text);
            text.Append(':');
            Write(members[i].Value, text);
        }

        text.Append('}');
    }

    private static void WriteString(string value, StringBuilder text)
    {
        text.Append('"');
        foreach (char c in value)
        {
            _ = c switch
            {
                '"' => text.Append("\\\""),
                '\\' => text.Append("\\\\"),
                '\b' => text.Append("\\b"),
                '\f' => text.Append("\\f"),
                '\n' => text.Append("\\n"),
                '\r' => text.Append("\\r"),
                '\t' => text.Append("\\t"),
                < ' ' => text.Append(CultureInfo.InvariantCulture, $"\\u{(int)c:x4}"),
                _ => text.Append(c),
            };
        }

        text.Append('"');
    }

    /// <summary>
    /// ECMAScript Number::toString: shortest digits that read back, plain notation for exponents from -7 to 20.
    /// </summary>
    private static string Number(double value)
    {
        if (!double.IsFinite(value))
        {
            throw new NotSupportedException("A number is beyond the range of a double.");
        }

        if (value == 0)
        {
            return "0";
        }

        string shortest = value.ToString("E16", CultureInfo.InvariantCulture);
        for (int digits = 0; digits < 17; digits++)
        {
            string candidate = value.ToString("E" + digits.ToString(CultureInfo.InvariantCulture), CultureInfo.InvariantCulture);
            if (double.Parse(candidate, NumberStyles.Float, CultureInfo.InvariantCulture) == value)
            {
                shortest = candidate;
                break;
            }
        }

        int mark = shortest.IndexOf('E', StringComparison.Ordinal);
        string sign = value < 0 ? "-" : "";
        string mantissa = shortest[(value < 0 ? 1 : 0)..mark].Replace(".", "", StringComparison.Ordinal);
        mantissa = mantissa.TrimEnd('0') is { Length: > 0 } trimmed ? trimmed : "0";
        int exponent = int.Parse(shortest[(mark + 1)..], CultureInfo.InvariantCulture);
        int count = mantissa.Length;
        if (exponent >= count - 1 && exponent < 21)
        {
            return sign + mantissa + new string('0', exponent - count + 1);
        }

        if (exponent is >= 0 and < 21)
        {
            return sign + mantissa[..(exponent + 1)] + "." + mantissa[(exponent + 1)..];
        }

        if (exponent is < 0 and >= -6)
        {
            return sign + "0." + new string('0', -exponent - 1) + mantissa;
        }

        string power = exponent.ToString("+0;-0", CultureInfo.InvariantCulture);
        return sign + mantissa[..1] + (count > 1 ? "." + mantissa[1..] : "") + "e" + power;
    }
}
