using Microsoft.AspNetCore.Mvc;
using Microsoft.AspNetCore.Mvc.RazorPages;
using Qc.Engine.Prediction;
using Qc.Records.People;
using Qc.Service.Features.Products;
using Qc.Service.Security;

namespace Qc.Service.Features.Pages;

/// <summary>One product: what is expected of it, where that is weak, and its specification versions.</summary>
public sealed class ProductModel(ProductQueries queries) : PageModel
{
    /// <summary>An expected shift less certain than this tells little apart; ours, chosen as half the widest shift tolerance.</summary>
    public const double WeakPpm = 0.3;

    public ProductView View { get; private set; } = null!;

    /// <summary>Groups whose expectation is weak, with the reason.</summary>
    public IReadOnlyList<(ProtonGroupDto Group, string Why)> Weak { get; private set; } = [];

    public async Task<IActionResult> OnGetAsync(string code, CancellationToken cancellation)
    {
        if (await queries.OneAsync(code, cancellation) is not { } view)
        {
            return NotFound();
        }

        View = view;
        Weak = [.. view.Expectation.ProtonGroups.Select(g => (g, Why(g))).Where(x => x.Item2 is not null).Select(x => (x.g, x.Item2!))];
        return Page();
    }

    /// <summary>Why the reader cannot approve a draft; null where they can.</summary>
    public string? WhyNoApproval(VersionView version) => version switch
    {
        _ when !User.IsInRole(Roles.QualityUnit) => "The quality unit approves it; your account does not have that role.",
        _ when version.DraftedBy == Caller.Name(User) => "You drafted it; a second person of the quality unit must approve it.",
        _ => null,
    };

    private static string? Why(ProtonGroupDto group) => group switch
    {
        { Exchangeable: true } => "It exchanges: shift, width and count are never judged.",
        { Basis: Basis.NotCovered } => "The tables do not cover its surroundings; the interval is the widest of its class.",
        { ExpectedStandardUncertaintyPpm: >= WeakPpm } => $"Its shift is known to {Words.Number(group.ExpectedStandardUncertaintyPpm, 2)} ppm only (k = 1).",
        _ => null,
    };
}
