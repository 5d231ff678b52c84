using Microsoft.AspNetCore.Mvc;
using Microsoft.AspNetCore.Mvc.RazorPages;
using Qc.Records;
using Qc.Service.Features.Certificates;

namespace Qc.Service.Features.Pages;

/// <summary>Whether a certificate may be relied on: by number or by file, for anyone, without a script. Nothing is changed by asking.</summary>
[IgnoreAntiforgeryToken]
[RequestSizeLimit(VerifyApi.LargestFileBytes + 4096)]
public sealed class VerifyModel(QcDbContext context) : PageModel
{
    public string? Number { get; private set; }

    public bool Asked { get; private set; }

    public PublicCertificate? Found { get; private set; }

    public async Task OnGetAsync(string? number, CancellationToken cancellation)
    {
        Number = number;
        Asked = !string.IsNullOrWhiteSpace(number);
        Found = Asked ? await VerifyApi.ByNumberAsync(context, number!, cancellation) : null;
    }

    public async Task OnPostAsync(IFormFile? file, CancellationToken cancellation)
    {
        Asked = true;
        if (file is not null)
        {
            using var bytes = new MemoryStream();
            await file.CopyToAsync(bytes, cancellation);
            Found = await VerifyApi.ByFileAsync(context, bytes.ToArray(), cancellation);
        }
    }
}
