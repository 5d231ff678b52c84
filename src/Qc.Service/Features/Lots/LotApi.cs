using System.Globalization;
using System.Security.Claims;
using System.Security.Cryptography;
using Microsoft.AspNetCore.Http.Features;
using Microsoft.EntityFrameworkCore;
using Microsoft.Extensions.Primitives;
using Microsoft.Net.Http.Headers;
using Qc.Records;
using Qc.Records.Lots;
using Qc.Service.Features.Reviews;
using Qc.Service.Http;
using Qc.Service.Security;

namespace Qc.Service.Features.Lots;

/// <summary>Routes of lots.</summary>
internal static class LotApi
{
    public static void MapLots(this IEndpointRouteBuilder api)
    {
        RouteGroupBuilder group = api.MapGroup("/lots").WithTags("Lots").RequireAuthorization(Policies.ReadLots);
        api.MapPost("/lots", SubmitAsync).WithTags("Lots").RequireAuthorization(Policies.SubmitLots)
            .Accepts<LotRequest>("application/json", "multipart/form-data").Produces<LotDto>(200).Produces<LotDto>(202)
            .WithProblems(400, 401, 403, 409, 413, 415, 422).WithSummary("Submits a lot; Prefer: wait=n answers it checked where it is done in time");
        group.MapGet("/", ListAsync).Produces<LotPage>().WithProblems(400, 401, 403).WithSummary("Lots, newest first");
        group.MapGet("/{id}", ReadAsync).Produces<LotDto>().WithProblems(401, 403, 404).WithSummary("A lot with everything found");
        group.MapGet("/{id}/spectra/{n:int}/original", OriginalAsync).Produces(200, contentType: "application/octet-stream")
            .WithProblems(401, 403, 404).WithSummary("The bytes as received");
        group.MapGet("/{id}/spectra/{n:int}/trace", TraceAsync).Produces<TraceDto>().WithProblems(400, 401, 403, 404)
            .WithSummary("Measured, modelled and left-over curve for drawing");
    }

    private static async Task<IResult> SubmitAsync(
        HttpContext http, SubmitLot submit, ReadLots lots, LotWaiters waiters, ClaimsPrincipal user, CancellationToken cancellation)
    {
        Outcome<Submission> submission = await ReadSubmissionAsync(http.Request, Caller.Name(user), cancellation);
        if (submission.Problem is { } unreadable)
        {
            return unreadable.ToResult();
        }

        Outcome<Accepted> accepted = await submit.RunAsync(submission.Value!, cancellation);
        if (accepted.Problem is { } problem)
        {
            return problem.ToResult();
        }

        string id = accepted.Value!.LotId;
        int waitSeconds = WaitSeconds(http.Request);
        if (waitSeconds > 0)
        {
            http.Response.Headers["Preference-Applied"] = string.Create(CultureInfo.InvariantCulture, $"wait={waitSeconds}");
            await WaitAsync(id, waitSeconds, lots, waiters, cancellation);
        }

        LotDto lot = (await lots.OneAsync(id, cancellation)).Value!;
        http.Response.Headers.Location = $"/api/v1/lots/{id}";
        http.Response.Headers.ETag = DecideLot.Tag(lot.State, lot.Reviews.Length);
        bool done = waitSeconds > 0 && lot.State is not (LotState.Queued or LotState.Checking);
        return Results.Json(lot, Json.Options, statusCode: done ? 200 : 202);
    }

    private static async Task WaitAsync(string id, int seconds, ReadLots lots, LotWaiters waiters, CancellationToken cancellation)
    {
        long until = Environment.TickCount64 + (1000L * seconds);
        while (await lots.IsPendingAsync(id, cancellation) && Environment.TickCount64 < until)
        {
            // Woken by the worker of this process, or looking again where another process does the work.
            await waiters.WaitAsync(id, TimeSpan.FromMilliseconds(Math.Clamp(until - Environment.TickCount64, 1, 250)), cancellation);
        }
    }

    /// <summary>RFC 7240: Prefer: wait=30. At most a minute.</summary>
    private static int WaitSeconds(HttpRequest request)
    {
        foreach (string preference in request.Headers["Prefer"].SelectMany(v => (v ?? "").Split(',')))
        {
            string[] parts = preference.Split('=', 2, StringSplitOptions.TrimEntries);
            if (parts.Length == 2 && parts[0].Equals("wait", StringComparison.OrdinalIgnoreCase)
                && int.TryParse(parts[1].Trim('"'), NumberStyles.None, CultureInfo.InvariantCulture, out int seconds))
            {
                return Math.Clamp(seconds, 0, 60);
            }
        }

        return 0;
    }

    private static async Task<Outcome<Submission>> ReadSubmissionAsync(HttpRequest request, string actor, CancellationToken cancellation)
    {
        string? key = request.Headers["Idempotency-Key"] is { Count: > 0 } values ? values.ToString() : null;
        if (!request.HasFormContentType)
        {
            return await ReadJsonAsync(request, key, actor, cancellation);
        }

        IFormCollection form;
        try
        {
            form = await request.ReadFormAsync(cancellation);
        }
        catch (InvalidDataException)
        {
            return Problem.Malformed("The form cannot be read, or one of its parts is too large.");
        }

        byte[]? lot = form.TryGetValue("lot", out StringValues text) ? System.Text.Encoding.UTF8.GetBytes(text.ToString()) : await FileAsync(form, "lot", cancellation);
        if (lot is null)
        {
            return Problem.Malformed("The form has no part named lot.", new FieldError("", "Send the lot's JSON as the part lot."));
        }

        Outcome<LotRequest> parsed = JsonBody.Parse<LotRequest>(lot);
        if (parsed.Problem is { } problem)
        {
            return problem;
        }

        using var hash = IncrementalHash.CreateHash(HashAlgorithmName.SHA256);
        hash.AppendData(lot);
        var files = new Dictionary<string, byte[]>(StringComparer.Ordinal);
        foreach (IFormFile file in form.Files.Where(f => f.Name != "lot").OrderBy(f => f.Name, StringComparer.Ordinal))
        {
            byte[] bytes = (await FileAsync(form, file.Name, cancellation))!;
            files[file.Name] = bytes;
            hash.AppendData(System.Text.Encoding.UTF8.GetBytes(file.Name));
            hash.AppendData(bytes);
        }

        return new Submission(parsed.Value!, files, key, Convert.ToHexStringLower(hash.GetHashAndReset()), actor);
    }

    private static async Task<Outcome<Submission>> ReadJsonAsync(HttpRequest request, string? key, string actor, CancellationToken cancellation)
    {
        if (!request.HasJsonContentType())
        {
            return Problem.UnsupportedMediaType("Send the lot as application/json or multipart/form-data.");
        }

        using var buffer = new MemoryStream();
        await request.Body.CopyToAsync(buffer, cancellation);
        byte[] body = buffer.ToArray();
        Outcome<LotRequest> parsed = JsonBody.Parse<LotRequest>(body);
        return parsed.Problem is { } problem
            ? problem
            : new Submission(parsed.Value!, new Dictionary<string, byte[]>(), key, Convert.ToHexStringLower(SHA256.HashData(body)), actor);
    }

    private static async Task<byte[]?> FileAsync(IFormCollection form, string name, CancellationToken cancellation)
    {
        if (form.Files.GetFile(name) is not { } file)
        {
            return null;
        }

        using var buffer = new MemoryStream();
        await file.CopyToAsync(buffer, cancellation);
        return buffer.ToArray();
    }

    private static async Task<IResult> ListAsync(
        ReadLots lots,
        CancellationToken cancellation,
        string? product = null,
        string? state = null,
        string? verdict = null,
        DateTimeOffset? from = null,
        DateTimeOffset? to = null,
        string? cursor = null) =>
        (await lots.ListAsync(new LotFilter(product, state, verdict, from, to, cursor), cancellation)).ToResult(Results.Ok);

    private static async Task<IResult> ReadAsync(string id, ReadLots lots, HttpResponse response, CancellationToken cancellation)
    {
        Outcome<LotDto> lot = await lots.OneAsync(id, cancellation);
        if (lot.Problem is null)
        {
            response.Headers.ETag = DecideLot.Tag(lot.Value!.State, lot.Value.Reviews.Length);
        }

        return lot.ToResult(Results.Ok);
    }

    private static async Task<IResult> OriginalAsync(string id, int n, QcDbContext context, CancellationToken cancellation)
    {
        LotSpectrum? spectrum = await context.LotSpectra.AsNoTracking().SingleOrDefaultAsync(s => s.LotId == id && s.Number == n, cancellation);
        if (spectrum is null)
        {
            return Problem.NotFound("spectrum").ToResult();
        }

        string extension = spectrum.Format switch { "nmrml" => "nmrML", "csv" => "csv", _ => "dx" };
        return Results.File(
            spectrum.Bytes, "application/octet-stream", $"{id}-{n}.{extension}", entityTag: new EntityTagHeaderValue($"\"{spectrum.Sha256}\""));
    }

    private static async Task<IResult> TraceAsync(
        string id, int n, HttpRequest request, QcDbContext context, CancellationToken cancellation, double? from = null, double? to = null, int points = 2000)
    {
        Trace? trace = await (
            from t in context.Traces.AsNoTracking()
            join c in context.Computations on t.ComputationId equals c.Id
            where c.LotId == id && t.SpectrumNumber == n
            orderby c.Number descending
            select t).FirstOrDefaultAsync(cancellation);
        if (trace is null)
        {
            return Problem.NotFound("trace").ToResult();
        }

        TraceDto dto = TraceWindow.Cut(trace, from, to, Math.Clamp(points, 10, 100_000));
        bool binary = request.GetTypedHeaders().Accept.Any(a => a.MediaType.Equals("application/octet-stream", StringComparison.OrdinalIgnoreCase));
        return binary ? Results.Bytes(TraceWindow.Bytes(dto), "application/octet-stream") : Results.Json(dto, Json.Options);
    }
}
