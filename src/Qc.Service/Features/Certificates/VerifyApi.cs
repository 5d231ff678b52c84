using System.Security.Cryptography;
using System.Text.Json.Serialization;
using Microsoft.EntityFrameworkCore;
using Qc.Records;
using Qc.Records.Reviews;
using Qc.Service.Http;
using Qc.Service.Security;

namespace Qc.Service.Features.Certificates;

/// <summary>
/// What anyone may know of a certificate. Numbers can be guessed, so by number alone neither product nor lot is told; whoever
/// posts the file itself has both in hand.
/// </summary>
public sealed record PublicCertificate(string Number, DateTimeOffset IssuedAt, string State, string? SupersededBy, DateTimeOffset? WithdrawnAt, string PdfSha256)
{
    /// <summary>Product code; only where the file was posted.</summary>
    [JsonIgnore(Condition = JsonIgnoreCondition.WhenWritingNull)]
    public string? Product { get; init; }

    /// <summary>Lot number; only where the file was posted.</summary>
    [JsonIgnore(Condition = JsonIgnoreCondition.WhenWritingNull)]
    public string? Lot { get; init; }
}

/// <summary>Public check of certificates: no account is needed.</summary>
internal static class VerifyApi
{
    /// <summary>Larger than any certificate.</summary>
    public const int LargestFileBytes = 4 << 20;

    public static void MapVerify(this IEndpointRouteBuilder api)
    {
        RouteGroupBuilder group = api.MapGroup("/verify").WithTags("Certificates").AllowAnonymous().RequireRateLimiting(RateLimits.Strangers);
        group.MapGet("/{number}", async (string number, QcDbContext context, CancellationToken cancellation) =>
            await ByNumberAsync(context, number, cancellation) is { } found ? Results.Ok(found) : Problem.NotFound("certificate").ToResult())
            .Produces<PublicCertificate>().WithProblems(404, 429).WithSummary("Whether a certificate may be relied on, by its number");
        group.MapPost("/", PostAsync).Accepts<byte[]>("application/pdf").Produces<PublicCertificate>().WithProblems(404, 413, 429)
            .WithSummary("The same by the file: it is byte for byte one that was issued here, or 404");
    }

    public static async Task<PublicCertificate?> ByNumberAsync(QcDbContext context, string number, CancellationToken cancellation)
    {
        string wanted = number.Trim().ToUpperInvariant();
        return wanted.Contains('\0', StringComparison.Ordinal) ? null : await FindAsync(context, context.Certificates.Where(c => c.Number == wanted), false, cancellation);
    }

    public static Task<PublicCertificate?> ByFileAsync(QcDbContext context, byte[] file, CancellationToken cancellation)
    {
        string sha256 = Convert.ToHexStringLower(SHA256.HashData(file));
        return FindAsync(context, context.Certificates.Where(c => c.PdfSha256 == sha256), true, cancellation);
    }

    private static async Task<PublicCertificate?> FindAsync(QcDbContext context, IQueryable<Certificate> which, bool hasFile, CancellationToken cancellation)
    {
        var found = await (
            from c in which
            join l in context.Lots on c.LotId equals l.Id
            join p in context.Products on l.ProductId equals p.Id
            select new { c.Number, c.IssuedAt, c.PdfSha256, p.Code, l.LotNumber }).SingleOrDefaultAsync(cancellation);
        if (found is null)
        {
            return null;
        }

        CertificateState state = await CertificateState.OfAsync(context, found.Number, cancellation);
        return new PublicCertificate(found.Number, found.IssuedAt, state.State, state.SupersededBy, state.WithdrawnAt, found.PdfSha256)
        {
            Product = hasFile ? found.Code : null,
            Lot = hasFile ? found.LotNumber : null,
        };
    }

    private static async Task<IResult> PostAsync(HttpRequest request, QcDbContext context, CancellationToken cancellation)
    {
        byte[] buffer = new byte[LargestFileBytes + 1];
        int read = await request.Body.ReadAtLeastAsync(buffer, buffer.Length, throwOnEndOfStream: false, cancellation);
        return read == buffer.Length
            ? Problem.TooLarge("No certificate is that large.").ToResult()
            : await ByFileAsync(context, buffer[..read], cancellation) is { } found
                ? Results.Ok(found)
                : Problem.NotFound("certificate").ToResult();
    }
}
