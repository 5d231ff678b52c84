using Microsoft.AspNetCore.Diagnostics;
using Npgsql;

namespace Qc.Service.Http;

/// <summary>The one place where what went wrong becomes problem+json.</summary>
internal sealed class UnexpectedErrors(ILogger<UnexpectedErrors> logger) : IExceptionHandler
{
    public async ValueTask<bool> TryHandleAsync(HttpContext context, Exception exception, CancellationToken cancellationToken)
    {
        Problem problem = exception switch
        {
            BadHttpRequestException { StatusCode: StatusCodes.Status413PayloadTooLarge } => Problem.TooLarge("The body is larger than this service accepts."),
            BadHttpRequestException e => Problem.Malformed("The request cannot be read.") with { Status = e.StatusCode },
            _ when IsUnstorable(exception) => Problem.Malformed("The request holds a character that is no text, such as NUL."),
            InvalidDataException => Problem.TooLarge("A part of the form is larger than this service accepts, or the form is damaged."),
            _ => new Problem("/problems/unexpected", "Unexpected error", 500, $"Something went wrong here; it is logged under {context.TraceIdentifier}."),
        };
        if (problem.Status == 500)
        {
            logger.LogError(exception, "Unexpected error on {Method} {Path}", context.Request.Method, context.Request.Path);
        }

        await problem.ToResult().ExecuteAsync(context);
        return true;
    }

    /// <summary>Text that PostgreSQL does not take: the transaction that met it has kept nothing.</summary>
    private static bool IsUnstorable(Exception exception) =>
        (exception as PostgresException ?? exception.InnerException as PostgresException)?.SqlState
            is PostgresErrorCodes.CharacterNotInRepertoire or PostgresErrorCodes.UntranslatableCharacter;
}

/// <summary>Gives bare status codes of the framework (404, 405, 415 ...) a body under /api.</summary>
internal static class StatusProblems
{
    public static async Task WriteAsync(StatusCodeContext context)
    {
        HttpContext http = context.HttpContext;
        if (!http.Request.Path.StartsWithSegments("/api"))
        {
            return;
        }

        Problem problem = http.Response.StatusCode switch
        {
            400 => Problem.Malformed("The request cannot be read; a parameter is missing or has the wrong type."),
            401 => Problem.SignInNeeded(),
            403 => Problem.NotAllowed("This account or key may not do that."),
            404 => Problem.NotFound("address"),
            405 => new Problem("/problems/method-not-allowed", "Method not allowed", 405, "This address does not take that method."),
            413 => Problem.TooLarge("The body is larger than this service accepts."),
            415 => Problem.UnsupportedMediaType("This address does not take that media type."),
            int status => new Problem("/problems/refused", "Refused", status, "The request was refused."),
        };
        await problem.ToResult().ExecuteAsync(http);
    }
}
