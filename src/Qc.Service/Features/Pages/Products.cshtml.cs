using Microsoft.AspNetCore.Mvc.RazorPages;

namespace Qc.Service.Features.Pages;

/// <summary>All products.</summary>
public sealed class ProductsModel(ProductQueries queries) : PageModel
{
    public IReadOnlyList<ProductRow> Rows { get; private set; } = [];

    public async Task OnGetAsync(CancellationToken cancellation) => Rows = await queries.AllAsync(cancellation);
}
