using System.Text.Json.Serialization;

namespace Qc.Service.Http;

/// <summary>A field at fault.</summary>
/// <param name="Pointer">RFC 6901 pointer into the request body.</param>
/// <param name="Detail">What is wrong with it, and what to do.</param>
public sealed record FieldError(string Pointer, string Detail);

/// <summary>An error as RFC 9457 describes it. <see cref="Type"/> is stable; callers may switch on it.</summary>
public sealed record Problem(
    string Type,
    string Title,
    int Status,
    string Detail,
    [property: JsonIgnore(Condition = JsonIgnoreCondition.WhenWritingNull)] IReadOnlyList<FieldError>? Errors = null)
{
    /// <summary>Media type of RFC 9457.</summary>
    public const string MediaType = "application/problem+json";

    /// <summary>400: the body is not JSON, or not the JSON that is expected.</summary>
    public static Problem Malformed(string detail, params FieldError[] errors) =>
        new("/problems/malformed", "The request cannot be read", 400, detail, errors.Length == 0 ? null : errors);

    /// <summary>401.</summary>
    public static Problem SignInNeeded(string detail = "Sign in, or send a valid key.") =>
        new("/problems/sign-in-needed", "Sign-in needed", 401, detail);

    /// <summary>403.</summary>
    public static Problem NotAllowed(string detail) => new("/problems/not-allowed", "Not allowed", 403, detail);

    /// <summary>404; the same words whether it never existed or is hidden.</summary>
    public static Problem NotFound(string what) => new("/problems/not-found", "Not found", 404, $"There is no such {what}.");

    /// <summary>409.</summary>
    public static Problem Conflict(string type, string title, string detail, params FieldError[] errors) =>
        new($"/problems/{type}", title, 409, detail, errors.Length == 0 ? null : errors);

    /// <summary>412: somebody else was faster.</summary>
    public static Problem Changed(string detail) => new("/problems/changed", "Changed in the meantime", 412, detail);

    /// <summary>413.</summary>
    public static Problem TooLarge(string detail) => new("/problems/too-large", "Too large", 413, detail);

    /// <summary>415.</summary>
    public static Problem UnsupportedMediaType(string detail) => new("/problems/unsupported-media-type", "Unsupported media type", 415, detail);

    /// <summary>422: readable, but a field is wrong.</summary>
    public static Problem Invalid(string type, string title, string detail, params FieldError[] errors) =>
        new($"/problems/{type}", title, 422, detail, errors);

    /// <summary>422 for one field.</summary>
    public static Problem InvalidField(string pointer, string detail) =>
        Invalid("invalid-field", "A field is wrong", detail, new FieldError(pointer, detail));

    /// <summary>429.</summary>
    public static Problem TooMany() => new("/problems/too-many-requests", "Too many requests", 429, "Too many requests came from this address; wait a minute.");

    /// <summary>501.</summary>
    public static Problem NotBuilt(string detail) => new("/problems/not-built", "Not built yet", 501, detail);

    /// <summary>As the answer of an endpoint.</summary>
    public IResult ToResult() => Results.Json(this, statusCode: Status, contentType: MediaType);
}
