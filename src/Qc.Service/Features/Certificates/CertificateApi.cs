using Microsoft.EntityFrameworkCore;
using Qc.Records;
using Qc.Records.Reviews;
using Qc.Service.Http;
using Qc.Service.Security;

namespace Qc.Service.Features.Certificates;

/// <summary>Route of certificates.</summary>
internal static class CertificateApi
{
    public static void MapCertificates(this IEndpointRouteBuilder api) =>
        api.MapGet("/lots/{id}/certificate", ReadAsync).WithTags("Certificates").RequireAuthorization(Policies.ReadLots)
            .Produces(200, contentType: "application/pdf").WithProblems(401, 403, 404, 409)
            .WithSummary("The signed PDF; Accept: application/json gives the same data");

    private static async Task<IResult> ReadAsync(string id, HttpRequest request, QcDbContext context, CancellationToken cancellation)
    {
        Certificate? certificate = await context.Certificates.AsNoTracking().Where(c => c.LotId == id).OrderByDescending(c => c.Version).FirstOrDefaultAsync(cancellation);
        if (certificate is null)
        {
            return await context.Lots.AnyAsync(l => l.Id == id, cancellation)
                ? Problem.Conflict("no-certificate", "No certificate is due", "The lot has not been released.").ToResult()
                : Problem.NotFound("lot").ToResult();
        }

        bool wantsJson = request.GetTypedHeaders().Accept.Any(a => a.MediaType.Equals("application/json", StringComparison.OrdinalIgnoreCase));
        return wantsJson
            ? Results.Text(certificate.Json, "application/json")
            : Results.File(certificate.Pdf, "application/pdf", $"{certificate.Number}.pdf");
    }
}
