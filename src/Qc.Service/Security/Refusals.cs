namespace Qc.Service.Security;

/// <summary>Writes each refusal down before it is told: 403 to anyone, 401 to a key that is not valid.</summary>
internal sealed class Refusals(RequestDelegate next, AccessLog log)
{
    /// <summary>Marks a request that was refused with a redirection.</summary>
    public const string Mark = "qc:refused";

    public Task InvokeAsync(HttpContext context)
    {
        context.Response.OnStarting(() => NoteAsync(context));
        return next(context);
    }

    private Task NoteAsync(HttpContext context)
    {
        int status = context.Response.StatusCode;
        bool isKey = context.Request.Headers.Authorization.Count > 0;
        if (status == StatusCodes.Status401Unauthorized && isKey)
        {
            return log.NoteAsync(context, AccessLog.Nobody, "key.refused", "address", context.Request.Path);
        }

        return status == StatusCodes.Status403Forbidden || context.Items.ContainsKey(Mark)
            ? log.NoteAsync(
                context,
                context.User.Identity?.IsAuthenticated == true ? Caller.Name(context.User) : AccessLog.Nobody,
                "access.refused",
                "address",
                context.Request.Path)
            : Task.CompletedTask;
    }
}
