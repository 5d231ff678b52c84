using Microsoft.AspNetCore.Mvc.RazorPages;

namespace Qc.Service.Features.Pages;

/// <summary>All lots, newest first.</summary>
public sealed class LotsModel(LotQueries queries, TimeProvider time) : PageModel
{
    public IReadOnlyList<LotRow> Rows { get; private set; } = [];

    public string? After { get; private set; }

    public string? Next { get; private set; }

    public DateTimeOffset Now { get; } = time.GetUtcNow();

    public async Task OnGetAsync(string? after, CancellationToken cancellation)
    {
        After = string.IsNullOrEmpty(after) ? null : after;
        (Rows, Next) = await queries.NewestAsync(After, cancellation);
    }
}
