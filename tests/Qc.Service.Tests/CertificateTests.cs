using System.Diagnostics;
using System.IO.Compression;
using System.Net;
using System.Net.Http.Headers;
using System.Net.Http.Json;
using System.Security.Cryptography;
using System.Text;
using System.Text.Json.Nodes;
using Qc.Evidence;
using Qc.Service.Tests.Support;
using Xunit;

namespace Qc.Service.Tests;

/// <summary>A certificate after it was issued: withdrawn, superseded, checked by a stranger, and issued late.</summary>
[Collection(ServiceCollection.Name)]
public sealed class CertificateTests(ServiceFixture service)
{
    private const string Reason = "The label names another customer.";

    [Fact]
    public async Task A_withdrawn_certificate_says_so_wherever_it_is_asked_for()
    {
        (string lot, string number) = await ReleasedAsync();
        HttpClient quality = await service.AsAsync(ServiceFixture.QualityUnit);
        JsonNode state = await (await quality.PostAsJsonAsync($"/api/v1/certificates/{number}/withdraw", new { reason = Reason, password = ServiceFixture.Password })).JsonAsync();
        Assert.Equal("withdrawn", (string?)state["state"]);
        await (await quality.PostAsJsonAsync($"/api/v1/certificates/{number}/withdraw", new { reason = Reason, password = ServiceFixture.Password })).ProblemAsync(409, "certificate-ended");

        HttpResponseMessage pdf = await service.Lims.GetAsync($"/api/v1/lots/{lot}/certificate");
        Assert.Equal("withdrawn", pdf.Headers.GetValues("Qc-Certificate-State").Single());
        Assert.Contains("WITHDRAWN", pdf.Content.Headers.ContentDisposition!.FileName, StringComparison.Ordinal);
        JsonNode data = await JsonOfAsync($"/api/v1/lots/{lot}/certificate");
        Assert.Equal("withdrawn", (string?)data["status"]!["state"]);
        Assert.Equal(Reason, (string?)data["status"]!["reason"]);
        using HttpClient stranger = service.Anonymous();
        Assert.Equal("withdrawn", (string?)(await (await stranger.GetAsync($"/api/v1/verify/{number}")).JsonAsync())["state"]);
        Assert.Contains($"{number} is withdrawn", await stranger.GetStringAsync($"/verify?number={number}"), StringComparison.Ordinal);
        Assert.Equal(1L, await service.SqlAsync($"SELECT count(*) FROM qc.audit_rows WHERE action = 'certificate.withdrawn' AND subject_id = '{number}' AND canonical_json LIKE '%{Reason}%'"));
        Assert.Equal(1L, await service.SqlAsync($"SELECT count(*) FROM qc.signatures WHERE subject_type = 'certificate' AND subject_id = '{number}' AND person_user = 'quinn'"));
    }

    [Fact]
    public async Task A_superseded_certificate_names_its_successor_and_the_successor_names_it()
    {
        (string lot, string number) = await ReleasedAsync();
        HttpClient quality = await service.AsAsync(ServiceFixture.QualityUnit);
        JsonNode state = await (await quality.PostAsJsonAsync($"/api/v1/certificates/{number}/supersede", new { reason = Reason, password = ServiceFixture.Password })).JsonAsync();
        string successor = (string)state["supersededBy"]!;
        Assert.Equal("superseded", (string?)state["state"]);
        Assert.Equal("superseded", (string?)(await JsonOfAsync($"/api/v1/certificates/{number}"))["status"]!["state"]);
        JsonNode next = await JsonOfAsync($"/api/v1/lots/{lot}/certificate");
        Assert.Equal((successor, number, 2, "valid"), ((string)next["number"]!, (string)next["supersedes"]!, (int)next["version"]!, (string)next["status"]!["state"]!));
        await (await quality.PostAsJsonAsync($"/api/v1/certificates/{number}/supersede", new { reason = Reason, password = ServiceFixture.Password })).ProblemAsync(409, "certificate-ended");
    }

    [Fact]
    public async Task Only_the_quality_unit_ends_a_certificate_with_reason_and_password()
    {
        (_, string number) = await ReleasedAsync();
        long before = await service.CountRecordsAsync();
        HttpClient reviewer = await service.AsAsync(ServiceFixture.Reviewer);
        HttpClient quality = await service.AsAsync(ServiceFixture.QualityUnit);
        foreach (string act in new[] { "withdraw", "supersede" })
        {
            await (await reviewer.PostAsJsonAsync($"/api/v1/certificates/{number}/{act}", new { reason = Reason, password = ServiceFixture.Password })).ProblemAsync(403, "not-allowed");
            await (await quality.PostAsJsonAsync($"/api/v1/certificates/{number}/{act}", new { reason = " ", password = ServiceFixture.Password })).ProblemAsync(422, "invalid-field", "/reason");
            await (await quality.PostAsJsonAsync($"/api/v1/certificates/{number}/{act}", new { reason = Reason, password = "another password" })).ProblemAsync(422, "wrong-password", "/password");
            await (await quality.PostAsJsonAsync($"/api/v1/certificates/{number}/{act}", new { reason = Reason })).ProblemAsync(422, "invalid-field", "/password");
            await (await quality.PostAsJsonAsync($"/api/v1/certificates/QC-1999-000001/{act}", new { reason = Reason, password = ServiceFixture.Password })).ProblemAsync(404, "not-found");
        }

        Assert.Equal(before, await service.CountRecordsAsync());
    }

    [Fact]
    public async Task A_stranger_learns_the_state_by_number_and_product_and_lot_only_with_the_file()
    {
        (string lot, string number) = await ReleasedAsync();
        byte[] pdf = await service.Lims.GetByteArrayAsync($"/api/v1/lots/{lot}/certificate");
        using HttpClient stranger = service.Anonymous();
        JsonNode byNumber = await (await stranger.GetAsync($"/api/v1/verify/{number}")).JsonAsync();
        Assert.Equal("valid", (string?)byNumber["state"]);
        Assert.Null(byNumber["lot"]);
        Assert.Null(byNumber["product"]);

        JsonNode byFile = await (await PostPdfAsync(stranger, pdf)).JsonAsync();
        Assert.Equal(number, (string?)byFile["number"]);
        Assert.NotNull((string?)byFile["lot"]);
        pdf[pdf.Length / 2] ^= 1;
        await (await PostPdfAsync(stranger, pdf)).ProblemAsync(404, "not-found");
        await (await PostPdfAsync(stranger, new byte[5 << 20])).ProblemAsync(413, "too-large");
        await (await stranger.GetAsync("/api/v1/verify/QC-1999-000001")).ProblemAsync(404, "not-found");
        pdf[pdf.Length / 2] ^= 1;
        using var form = new MultipartFormDataContent { { new ByteArrayContent(pdf), "file", "certificate.pdf" } };
        Assert.Contains("byte for byte", await (await stranger.PostAsync("/verify", form)).Content.ReadAsStringAsync(), StringComparison.Ordinal);
    }

    [Fact]
    public async Task The_archive_of_a_lot_is_whole_and_any_change_of_it_is_found()
    {
        (string lot, string number) = await ReleasedAsync();
        byte[] zip = await service.Lims.GetByteArrayAsync($"/api/v1/lots/{lot}/archive");
        var files = new Dictionary<string, byte[]>();
        using (var archive = new ZipArchive(new MemoryStream(zip)))
        {
            foreach (ZipArchiveEntry entry in archive.Entries)
            {
                using var bytes = new MemoryStream();
                await (await entry.OpenAsync()).CopyToAsync(bytes);
                files[entry.FullName] = bytes.ToArray();
            }
        }

        HttpClient auditor = await service.AsAsync(ServiceFixture.Auditor);
        using var key = ECDsa.Create();
        key.ImportFromPem(await auditor.GetStringAsync("/api/v1/audit/key"));
        Verification whole = ArchiveManifest.Verify(files, key);
        Assert.True(whole.IsValid, whole.Message);
        Assert.Equal(await service.Lims.GetByteArrayAsync($"/api/v1/lots/{lot}/spectra/1/original"), files["spectra/1.dx"]);
        Assert.Contains($"certificates/{number}.pdf", files.Keys);
        Assert.Contains("href=\"spectra/1.dx\"", Encoding.UTF8.GetString(files["index.html"]), StringComparison.Ordinal);
        Assert.True(files.Keys.Count(n => n.StartsWith("proofs/", StringComparison.Ordinal)) >= 5);
        foreach (string name in files.Keys.ToArray())
        {
            byte[] genuine = files[name];
            files[name] = [.. genuine[..^1], (byte)(genuine[^1] ^ 1)];
            Assert.False(ArchiveManifest.Verify(files, key).IsValid, name);
            files.Remove(name);
            Assert.False(ArchiveManifest.Verify(files, key).IsValid, name);
            files[name] = genuine;
        }

        files["extra.txt"] = [1];
        Assert.False(ArchiveManifest.Verify(files, key).IsValid);
        await (await service.Lims.GetAsync("/api/v1/lots/none/archive")).ProblemAsync(404, "not-found");
    }

    [Fact]
    public async Task A_certificate_that_could_not_be_issued_follows_once_it_can_be()
    {
        // The service signs no log shorter than one it signed before; such a head beside its key makes issuing fail.
        string kept = Path.Combine(service.Folder, "keys", "last-head.txt");
        HttpClient auditor = await service.AsAsync(ServiceFixture.Auditor);
        await (await auditor.GetAsync("/api/v1/audit/head")).JsonAsync();
        string genuine = await File.ReadAllTextAsync(kept);
        string[] lines = genuine.Split('\n');
        lines[2] = "999999999";
        string product = await Plant.ProductAsync(service);
        string lot = (string)(await Plant.CheckedLotAsync(service, product, "ethyl acetate"))["id"]!;
        HttpClient reviewer = await service.AsAsync(ServiceFixture.Reviewer);
        JsonNode decided;
        try
        {
            await File.WriteAllTextAsync(kept, string.Join('\n', lines));
            decided = await (await reviewer.PostAsJsonAsync($"/api/v1/lots/{lot}/reviews", new { decision = "release", reason = "In order.", password = ServiceFixture.Password })).JsonAsync(HttpStatusCode.Created);
        }
        finally
        {
            await File.WriteAllTextAsync(kept, genuine);
        }

        Assert.Equal("reviewed", (string?)decided["state"]);
        var watch = Stopwatch.StartNew();
        while ((await service.Lims.GetAsync($"/api/v1/lots/{lot}/certificate")).StatusCode != HttpStatusCode.OK)
        {
            Assert.True(watch.Elapsed < TimeSpan.FromSeconds(20), "No certificate after 20 s.");
            await Task.Delay(200);
        }

        Assert.Equal(1L, await service.SqlAsync($"SELECT count(*) FROM qc.certificates WHERE lot_id = '{lot}'"));
        Assert.Equal("released", (string?)(await (await service.Lims.GetAsync($"/api/v1/lots/{lot}")).JsonAsync())["state"]);
    }

    private async Task<(string Lot, string Number)> ReleasedAsync()
    {
        string product = await Plant.ProductAsync(service, specification: new { releaseByException = true });
        string lot = (string)(await Plant.CheckedLotAsync(service, product, "ethyl acetate"))["id"]!;
        return (lot, (string)(await JsonOfAsync($"/api/v1/lots/{lot}/certificate"))["number"]!);
    }

    private async Task<JsonNode> JsonOfAsync(string address)
    {
        using var request = new HttpRequestMessage(HttpMethod.Get, address);
        request.Headers.Accept.Add(new MediaTypeWithQualityHeaderValue("application/json"));
        return await (await service.Lims.SendAsync(request)).JsonAsync();
    }

    private static Task<HttpResponseMessage> PostPdfAsync(HttpClient client, byte[] pdf)
    {
        var content = new ByteArrayContent(pdf);
        content.Headers.ContentType = new MediaTypeHeaderValue("application/pdf");
        return client.PostAsync("/api/v1/verify", content);
    }
}
