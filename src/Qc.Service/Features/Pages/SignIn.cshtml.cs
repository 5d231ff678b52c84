using Microsoft.AspNetCore.Mvc;
using Microsoft.AspNetCore.Mvc.RazorPages;
using Microsoft.EntityFrameworkCore;
using Qc.Records;

namespace Qc.Service.Features.Pages;

/// <summary>Signing in; leads to the set-up page while there is nobody who could.</summary>
public sealed class SignInModel(QcDbContext context) : PageModel
{
    public async Task<IActionResult> OnGetAsync(CancellationToken cancellation) =>
        await context.Users.AnyAsync(cancellation) ? Page() : Redirect("/set-up");
}
