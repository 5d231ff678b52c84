using Qc.Service.Http;

namespace Qc.Service.Security;

/// <summary>
/// Protects cookie-authenticated calls from other sites: an unsafe method that comes with the session cookie is refused
/// where the browser says that another origin sent it (Fetch metadata, else Origin). Keys are not sent by browsers.
/// </summary>
internal sealed class SameOrigin(RequestDelegate next)
{
    public async Task InvokeAsync(HttpContext context)
    {
        HttpRequest request = context.Request;
        bool isSafe = HttpMethods.IsGet(request.Method) || HttpMethods.IsHead(request.Method) || HttpMethods.IsOptions(request.Method);
        if (!isSafe && request.Headers.Authorization.Count == 0 && IsForeign(request))
        {
            await Problem.NotAllowed("The request came from another site.").ToResult().ExecuteAsync(context);
            return;
        }

        await next(context);
    }

    private static bool IsForeign(HttpRequest request)
    {
        string? site = request.Headers["Sec-Fetch-Site"];
        if (site is not null)
        {
            return site is not ("same-origin" or "none");
        }

        string? origin = request.Headers.Origin;
        return origin is not null && !string.Equals(origin, $"{request.Scheme}://{request.Host}", StringComparison.OrdinalIgnoreCase);
    }
}
