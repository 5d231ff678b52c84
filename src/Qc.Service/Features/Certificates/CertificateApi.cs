using System.Security.Claims;
using System.Text.Json;
using System.Text.Json.Nodes;
using Microsoft.EntityFrameworkCore;
using Qc.Records;
using Qc.Records.Reviews;
using Qc.Service.Http;
using Qc.Service.Security;

namespace Qc.Service.Features.Certificates;

/// <summary>Routes of certificates.</summary>
internal static class CertificateApi
{
    /// <summary>Header of a downloaded PDF: a signed file cannot be stamped afterwards.</summary>
    public const string StateHeader = "Qc-Certificate-State";

    public static void MapCertificates(this IEndpointRouteBuilder api)
    {
        api.MapGet("/lots/{id}/certificate", ReadAsync).WithTags("Certificates").RequireAuthorization(Policies.ReadLots)
            .Produces(200, contentType: "application/pdf").WithProblems(401, 403, 404, 409)
            .WithSummary("The newest signed PDF; Accept: application/json gives the same data, and whether it still holds");
        api.MapGet("/lots/{id}/archive", async (string id, LotArchive archive, CancellationToken cancellation) =>
            await archive.MakeAsync(id, cancellation) is { } zip ? Results.File(zip, "application/zip", $"lot-{id}.zip") : Problem.NotFound("lot").ToResult())
            .WithTags("Lots").RequireAuthorization(Policies.ReadLots).Produces(200, contentType: "application/zip").WithProblems(401, 403, 404)
            .WithSummary("Everything of a lot in one zip that opens offline; qc-verify archive checks it");
        RouteGroupBuilder one = api.MapGroup("/certificates/{number}").WithTags("Certificates");
        one.MapGet("/", OneAsync).RequireAuthorization(Policies.ReadLots).Produces(200, contentType: "application/pdf").WithProblems(401, 403, 404)
            .WithSummary("A certificate by its number, superseded and withdrawn ones too");
        one.MapPost("/withdraw", (string number, HttpRequest request, EndCertificate end, ClaimsPrincipal user, CancellationToken cancellation) =>
                EndAsync(request, body => end.WithdrawAsync(number, body, user.Identity!.Name!, cancellation), cancellation))
            .RequireAuthorization(Policies.EndCertificates).Accepts<EndRequest>("application/json").Produces<CertificateState>()
            .WithProblems(400, 401, 403, 404, 409, 415, 422).WithSummary("Withdraws a certificate, signed");
        one.MapPost("/supersede", (string number, HttpRequest request, EndCertificate end, ClaimsPrincipal user, CancellationToken cancellation) =>
                EndAsync(request, body => end.SupersedeAsync(number, body, user.Identity!.Name!, cancellation), cancellation))
            .RequireAuthorization(Policies.EndCertificates).Accepts<EndRequest>("application/json").Produces<CertificateState>()
            .WithProblems(400, 401, 403, 404, 409, 415, 422).WithSummary("Issues another certificate in its place, signed");
    }

    private static async Task<IResult> EndAsync(HttpRequest request, Func<EndRequest, Task<Outcome<CertificateState>>> end, CancellationToken cancellation)
    {
        Outcome<EndRequest> body = await JsonBody.ReadAsync<EndRequest>(request, cancellation);
        return body.Problem is { } problem ? problem.ToResult() : (await end(body.Value!)).ToResult(Results.Ok);
    }

    private static async Task<IResult> ReadAsync(string id, HttpContext http, QcDbContext context, CancellationToken cancellation)
    {
        Certificate? certificate = await context.Certificates.AsNoTracking().Where(c => c.LotId == id).OrderByDescending(c => c.Version).FirstOrDefaultAsync(cancellation);
        return certificate is not null
            ? await AnswerAsync(certificate, http, context, cancellation)
            : await context.Lots.AnyAsync(l => l.Id == id, cancellation)
                ? Problem.Conflict("no-certificate", "No certificate is due", "The lot has not been released.").ToResult()
                : Problem.NotFound("lot").ToResult();
    }

    private static async Task<IResult> OneAsync(string number, HttpContext http, QcDbContext context, CancellationToken cancellation) =>
        await context.Certificates.AsNoTracking().SingleOrDefaultAsync(c => c.Number == number, cancellation) is { } certificate
            ? await AnswerAsync(certificate, http, context, cancellation)
            : Problem.NotFound("certificate").ToResult();

    private static async Task<IResult> AnswerAsync(Certificate certificate, HttpContext http, QcDbContext context, CancellationToken cancellation)
    {
        CertificateState state = await CertificateState.OfAsync(context, certificate.Number, cancellation);
        http.Response.Headers[StateHeader] = state.State;
        http.Response.Headers.CacheControl = "no-store";
        if (!http.Request.GetTypedHeaders().Accept.Any(a => a.MediaType.Equals("application/json", StringComparison.OrdinalIgnoreCase)))
        {
            string mark = state.State == CertificateState.Valid ? "" : "-" + state.State.ToUpperInvariant();
            return Results.File(certificate.Pdf, "application/pdf", $"{certificate.Number}{mark}.pdf");
        }

        JsonNode data = JsonNode.Parse(certificate.Json)!;
        data["status"] = JsonSerializer.SerializeToNode(state, Json.Options);
        return Results.Text(data.ToJsonString(), "application/json");
    }
}
