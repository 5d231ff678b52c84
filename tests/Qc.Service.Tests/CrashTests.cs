using System.Net;
using System.Net.Http.Json;
using System.Text.Json.Nodes;
using Qc.Service.Tests.Support;
using Xunit;

namespace Qc.Service.Tests;

/// <summary>What was acknowledged outlives a crash, and nothing is done twice.</summary>
[Collection(ServiceCollection.Name)]
public sealed class CrashTests(ServiceFixture service)
{
    [Fact]
    public async Task Lots_accepted_before_the_process_is_killed_are_checked_once_after_it_starts_again()
    {
        string product = await Plant.ProductAsync(service);
        var ids = new List<string>();
        for (int i = 0; i < 6; i++)
        {
            HttpResponseMessage answer = await service.Lims.PostAsJsonAsync("/api/v1/lots", Plant.Lot(product, "ethyl acetate"));
            ids.Add((string)(await answer.JsonAsync(HttpStatusCode.Accepted))["id"]!);
        }

        await service.KillAsync();
        string list = string.Join(", ", ids.Select(id => $"'{id}'"));
        Assert.Equal(6L, await service.SqlAsync($"SELECT count(*) FROM qc.lots WHERE id IN ({list})"));
        Assert.True((long)(await service.SqlAsync($"SELECT count(*) FROM qc.computations WHERE lot_id IN ({list})"))! < 6, "All were checked before the kill; the test shows nothing.");
        await service.StartAgainAsync();
        for (int wait = 0; wait < 120 && await UncheckedAsync() > 0; wait++)
        {
            await Task.Delay(500);
        }

        Assert.Equal(0L, await UncheckedAsync());
        Assert.Equal(6L, await service.SqlAsync($"SELECT count(*) FROM qc.computations WHERE lot_id IN ({list})"));
        Assert.Equal(6L, await service.SqlAsync($"SELECT count(*) FROM qc.audit_rows WHERE action = 'lot.checked' AND subject_id IN ({list})"));

        async Task<long> UncheckedAsync() => (long)(await service.SqlAsync(
            $"SELECT count(*) FROM qc.lots l WHERE id IN ({list}) AND NOT EXISTS (SELECT 1 FROM qc.computations c WHERE c.lot_id = l.id)"))!;
    }
}
