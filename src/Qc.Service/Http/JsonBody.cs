using System.Globalization;
using System.Text;
using System.Text.Json;

namespace Qc.Service.Http;

/// <summary>Reads a JSON body strictly and says where it is wrong.</summary>
public static class JsonBody
{
    private const string NotJson = "It is not valid JSON.";

    /// <summary>The body as <typeparamref name="T"/>, or a problem that points at the place.</summary>
    public static async Task<Outcome<T>> ReadAsync<T>(HttpRequest request, CancellationToken cancellation)
        where T : class
    {
        if (!request.HasJsonContentType())
        {
            return Problem.UnsupportedMediaType("Send the body as application/json.");
        }

        using var buffer = new MemoryStream();
        try
        {
            await request.Body.CopyToAsync(buffer, cancellation);
        }
        catch (BadHttpRequestException e) when (e.StatusCode == StatusCodes.Status413PayloadTooLarge)
        {
            return Problem.TooLarge("The body is larger than this service accepts.");
        }

        return Parse<T>(buffer.ToArray());
    }

    /// <summary>Bytes as <typeparamref name="T"/>, or a problem that points at the place.</summary>
    public static Outcome<T> Parse<T>(ReadOnlySpan<byte> json)
        where T : class
    {
        try
        {
            T? value = JsonSerializer.Deserialize<T>(json, Json.Strict);
            return value is null ? Problem.Malformed("The body is null; an object is expected.") : value;
        }
        catch (JsonException e)
        {
            string pointer = Pointer(e.Path);
            FieldError[] missing = [.. Missing(e).Select(name => new FieldError($"{pointer}/{name}", "This field is required."))];
            if (missing.Length > 0)
            {
                return Problem.Invalid("invalid-field", "A field is missing", $"The body needs {missing[0].Pointer}.", missing);
            }

            string place = string.Create(CultureInfo.InvariantCulture, $"line {(e.LineNumber ?? 0) + 1}, byte {(e.BytePositionInLine ?? 0) + 1}");
            return pointer.Length > 0 && Reason(e) != NotJson
                ? Problem.Invalid("invalid-field", "A field is wrong", $"The body is wrong at {pointer} ({place}).", new FieldError(pointer, Reason(e)))
                : Problem.Malformed($"The body is not the JSON that is expected ({place}). {Reason(e)}");
        }
        catch (NotSupportedException)
        {
            return Problem.Malformed("The body has a type that is not expected.");
        }
    }

    /// <summary>Required members that are missing, as the reader's message quotes them: including: 'lot', 'spectra'.</summary>
    private static IEnumerable<string> Missing(JsonException e)
    {
        int from = e.Message.IndexOf("including", StringComparison.Ordinal);
        return from < 0 || !e.Message.Contains("missing required properties", StringComparison.Ordinal)
            ? []
            : e.Message[from..].Split('\'').Where((_, i) => i % 2 == 1);
    }

    /// <summary>The reader's own words, without the type names and positions that it appends.</summary>
    private static string Reason(JsonException e)
    {
        if (e.Message.Contains("could not be mapped to any .NET member", StringComparison.Ordinal))
        {
            return "This field is not known; leave it out.";
        }

        if (e.Message.Contains("doesn't allow setting null", StringComparison.Ordinal))
        {
            return "This field must not be null; leave it out or give a value.";
        }

        return e.Message.StartsWith("The JSON value could not be converted", StringComparison.Ordinal)
            ? "This value has the wrong type."
            : NotJson;
    }

    /// <summary>"$.sample.massMg" and "$.spectra[0].name" as RFC 6901 pointers; the root is "".</summary>
    private static string Pointer(string? path)
    {
        if (path is null or "$")
        {
            return "";
        }

        var pointer = new StringBuilder();
        foreach (string part in path.TrimStart('$').Replace("[", ".", StringComparison.Ordinal).Replace("]", "", StringComparison.Ordinal).Split('.', StringSplitOptions.RemoveEmptyEntries))
        {
            pointer.Append('/').Append(part.Trim('\'').Replace("~", "~0", StringComparison.Ordinal).Replace("/", "~1", StringComparison.Ordinal));
        }

        return pointer.ToString();
    }
}
