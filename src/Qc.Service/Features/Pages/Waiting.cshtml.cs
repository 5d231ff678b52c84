using Microsoft.AspNetCore.Mvc.RazorPages;

namespace Qc.Service.Features.Pages;

/// <summary>What waits for a decision, oldest first.</summary>
public sealed class WaitingModel(LotQueries queries, TimeProvider time) : PageModel
{
    public WaitingFilter Filter { get; private set; } = new(null, null, null);

    public WaitingLots Lots { get; private set; } = null!;

    public DateTimeOffset Now { get; } = time.GetUtcNow();

    public async Task OnGetAsync(string? product, string? state, string? verdict, CancellationToken cancellation)
    {
        Filter = new WaitingFilter(Chosen(product), Chosen(state), Chosen(verdict));
        Lots = await queries.WaitingAsync(Filter, cancellation);
    }

    private static string? Chosen(string? value) => string.IsNullOrEmpty(value) ? null : value;
}
