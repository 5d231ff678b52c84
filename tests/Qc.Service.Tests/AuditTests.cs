using System.Security.Cryptography;
using System.Text.Json.Nodes;
using Qc.Evidence;
using Qc.Service.Tests.Support;
using Xunit;

namespace Qc.Service.Tests;

/// <summary>What an auditor can prove with an old head and a few hashes.</summary>
[Collection(ServiceCollection.Name)]
public sealed class AuditTests(ServiceFixture service)
{
    [Fact]
    public async Task The_log_grows_only_and_its_export_verifies_until_a_byte_is_changed()
    {
        HttpClient auditor = await service.AsAsync(ServiceFixture.Auditor);
        await service.AsAsync(ServiceFixture.MethodOwner); // Signing in is an entry too.
        await service.AsAsync(ServiceFixture.QualityUnit);
        JsonNode old = await (await auditor.GetAsync("/api/v1/audit/head")).JsonAsync();
        await Plant.ProductAsync(service);
        JsonNode current = await (await auditor.GetAsync("/api/v1/audit/head")).JsonAsync();
        long oldSize = (long)old["size"]!;
        long newSize = (long)current["size"]!;
        Assert.Equal(oldSize + 3, newSize); // Product, draft, approval.

        JsonNode proof = await (await auditor.GetAsync($"/api/v1/audit/consistency?from={oldSize}&to={newSize}")).JsonAsync();
        byte[][] path = [.. proof["path"]!.AsArray().Select(h => Convert.FromHexString((string)h!))];
        byte[] oldRoot = Convert.FromHexString((string)old["rootHex"]!);
        byte[] newRoot = Convert.FromHexString((string)current["rootHex"]!);
        Assert.True(MerkleTree.VerifyConsistency(oldSize, newSize, oldRoot, newRoot, path));
        oldRoot[7] ^= 1;
        Assert.False(MerkleTree.VerifyConsistency(oldSize, newSize, oldRoot, newRoot, path));

        using var key = ECDsa.Create();
        key.ImportFromPem(await auditor.GetStringAsync("/api/v1/audit/key"));
        Assert.True(TreeHead.Verify((string)current["text"]!, (string)current["signature"]!, key));
        byte[] export = await auditor.GetByteArrayAsync("/api/v1/audit/export");
        Verification whole = AuditExport.Verify(export, key);
        Assert.True(whole.IsValid, whole.Message);
        export[export.Length / 2] ^= 1;
        Assert.False(AuditExport.Verify(export, key).IsValid);
    }

    [Fact]
    public async Task The_whole_database_agrees_with_its_log_until_a_row_is_changed_past_the_triggers()
    {
        string product = await Plant.ProductAsync(service, specification: new { releaseByException = true });
        JsonNode lot = await Plant.CheckedLotAsync(service, product, "ethyl acetate");
        HttpClient auditor = await service.AsAsync(ServiceFixture.Auditor);
        await (await auditor.GetAsync("/api/v1/audit/head")).JsonAsync();
        JsonNode whole = await (await auditor.GetAsync("/api/v1/audit/check")).JsonAsync();
        Assert.Empty(whole["findings"]!.AsArray());
        Assert.True((long)whole["records"]! >= 10);

        string change = $"UPDATE qc.computations SET duration_milliseconds = duration_milliseconds {{0}} 1 WHERE lot_id = '{(string)lot["id"]!}'";
        const string Off = "ALTER TABLE qc.computations DISABLE TRIGGER refuse_change; ";
        const string On = "; ALTER TABLE qc.computations ENABLE ALWAYS TRIGGER refuse_change";
        object? exact = await service.SqlAsync($"SELECT duration_milliseconds FROM qc.computations WHERE lot_id = '{(string)lot["id"]!}'");
        await service.SqlAsync(Off + string.Format(System.Globalization.CultureInfo.InvariantCulture, change, "+") + On);
        JsonNode found = await (await auditor.GetAsync("/api/v1/audit/check")).JsonAsync();
        Assert.Contains("computations was changed", (string?)Assert.Single(found["findings"]!.AsArray()), StringComparison.Ordinal);
        await service.SqlAsync(string.Create(
            System.Globalization.CultureInfo.InvariantCulture, $"{Off}UPDATE qc.computations SET duration_milliseconds = {exact:R} WHERE lot_id = '{(string)lot["id"]!}'{On}"));
        Assert.Empty((await (await auditor.GetAsync("/api/v1/audit/check")).JsonAsync())["findings"]!.AsArray());
    }

    [Theory]
    [InlineData("/api/v1/audit/consistency?from=0", 400, "malformed")]
    [InlineData("/api/v1/audit/consistency?from=2&to=1", 400, "malformed")]
    [InlineData("/api/v1/audit/consistency?from=1&to=999999999", 400, "malformed")]
    [InlineData("/api/v1/audit/consistency", 400, "malformed")]
    [InlineData("/api/v1/audit/entries/999999999/proof", 404, "not-found")]
    public async Task What_is_not_in_the_log_cannot_be_proven(string address, int status, string type)
    {
        HttpClient auditor = await service.AsAsync(ServiceFixture.Auditor);
        await (await auditor.GetAsync(address)).ProblemAsync(status, type);
    }
}
