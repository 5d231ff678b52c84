namespace Qc.Service.Http;

/// <summary>Declares the problems an endpoint may answer with.</summary>
internal static class EndpointExtensions
{
    public static RouteHandlerBuilder WithProblems(this RouteHandlerBuilder builder, params ReadOnlySpan<int> statuses)
    {
        foreach (int status in statuses)
        {
            builder.Produces<Problem>(status, Problem.MediaType);
        }

        return builder;
    }
}
