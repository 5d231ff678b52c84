using Microsoft.AspNetCore.Mvc;
using Microsoft.AspNetCore.Mvc.RazorPages;
using Microsoft.EntityFrameworkCore;
using Qc.Records;

namespace Qc.Service.Features.Pages;

/// <summary>Makes the first administrator, once.</summary>
public sealed class SetUpModel(QcDbContext context) : PageModel
{
    public async Task<IActionResult> OnGetAsync(CancellationToken cancellation) =>
        await context.Users.AnyAsync(cancellation) ? Redirect("/sign-in") : Page();
}
