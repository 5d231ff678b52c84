using Microsoft.AspNetCore.Mvc;
using Microsoft.AspNetCore.Mvc.Filters;
using Qc.Service.Security;

namespace Qc.Service.Features.Pages;

/// <summary>The pages people work with. They only read; every change goes through the API, from the browser.</summary>
public static class PagesSetup
{
    /// <summary>Adds them.</summary>
    public static WebApplicationBuilder AddQcPages(this WebApplicationBuilder builder)
    {
        builder.Services.AddScoped<LotQueries>().AddScoped<ProductQueries>();
        builder.Services
            .AddRazorPages(options =>
            {
                options.RootDirectory = "/Features";
                options.Conventions.AuthorizeFolder("/Pages", Policies.Read);
                options.Conventions.AllowAnonymousToPage("/Pages/SignIn");
                options.Conventions.AllowAnonymousToPage("/Pages/SetUp");
                options.Conventions.AllowAnonymousToPage("/Pages/Verify");
            })
            .AddMvcOptions(mvc => mvc.Filters.Add(new PageHeaders()));
        return builder;
    }

    /// <summary>Maps them.</summary>
    public static WebApplication MapQcPages(this WebApplication app)
    {
        app.MapGet("/", () => Results.Redirect("/waiting")).ExcludeFromDescription();
        app.MapRazorPages();
        return app;
    }

    /// <summary>Nothing but this service's own files runs, styles or is fetched; nothing of a lot stays in a cache.</summary>
    private sealed class PageHeaders : IAlwaysRunResultFilter
    {
        private const string Policy =
            "default-src 'none'; script-src 'self'; style-src 'self'; img-src 'self'; font-src 'self'; connect-src 'self'; "
            + "form-action 'self'; frame-ancestors 'none'; base-uri 'none'";

        public void OnResultExecuting(ResultExecutingContext context)
        {
            IHeaderDictionary headers = context.HttpContext.Response.Headers;
            headers.ContentSecurityPolicy = Policy;
            headers.XContentTypeOptions = "nosniff";
            headers["Referrer-Policy"] = "same-origin";
            headers.CacheControl = "no-store";
        }

        public void OnResultExecuted(ResultExecutedContext context)
        {
        }
    }
}
