using System.Security.Claims;
using Microsoft.AspNetCore.Mvc;
using Microsoft.AspNetCore.Mvc.RazorPages;
using Qc.Engine.Verdicts;
using Qc.Records.Lots;
using Qc.Records.People;
using Qc.Service.Security;

namespace Qc.Service.Features.Pages;

/// <summary>Findings of one family, flags first.</summary>
public sealed record FindingFamily(string Name, IReadOnlyList<Finding> Findings);

/// <summary>One lot: verdict, evidence, history, decision.</summary>
public sealed class LotModel(LotQueries queries) : PageModel
{
    public LotView View { get; private set; } = null!;

    public IReadOnlyList<FindingFamily> Families { get; private set; } = [];

    /// <summary>Each flag that a decision accepts or not.</summary>
    public IReadOnlyList<Finding> Flags { get; private set; } = [];

    /// <summary>Why the reader cannot decide; null where they can.</summary>
    public string? WhyNoDecision { get; private set; }

    /// <summary>Why the lot cannot be released on this measurement; null where it can.</summary>
    public string? WhyNoRelease { get; private set; }

    public async Task<IActionResult> OnGetAsync(string id, CancellationToken cancellation)
    {
        if (await queries.OneAsync(id, cancellation) is not { } view)
        {
            return NotFound();
        }

        View = view;
        Finding[] findings = view.Report is { Findings.IsDefaultOrEmpty: false } report ? [.. report.Findings] : [];
        Families = [.. findings.GroupBy(Family).Select(g => new FindingFamily(g.Key, [.. g.OrderByDescending(f => f.Outcome)]))];
        Flags = [.. findings.Where(f => f.Outcome == Outcome.Flag).DistinctBy(f => (f.Criterion, f.Subject))];
        WhyNoDecision = NoDecision(User, view);
        WhyNoRelease = view.Computation switch
        {
            { Unreadable: true } => "It cannot be released: the spectrum could not be read.",
            { Unsuitable: true } => "It cannot be released on this measurement, which was not fit to be judged.",
            _ => null,
        };
        return Page();
    }

    /// <summary>Atoms (from 1) of the proton group that a finding is about, as the browser modules read them; empty for another subject.</summary>
    public string Atoms(string subject) => View.Report is { Protons.IsDefaultOrEmpty: false } report
        ? string.Join(',', report.Protons.Where(l => l.Group == subject).SelectMany(l => l.Atoms))
        : "";

    /// <summary>The API refuses for the same reasons; here they are said before anyone fills in the form.</summary>
    private static string? NoDecision(ClaimsPrincipal user, LotView view) => view switch
    {
        { State: LotState.Queued or LotState.Checking } => "There is nothing to decide until the check is done.",
        { State: not (LotState.Checked or LotState.Unreadable) } => $"This lot is decided: it is {Words.State(view.State)}.",
        _ when !user.IsInRole(Roles.Reviewer) => "Reviewers decide on lots; your account does not have that role.",
        _ when view.Lot.SubmittedBy == Caller.Name(user) => "You submitted this lot; another reviewer must decide on it.",
        _ => null,
    };

    private static string Family(Finding finding) => finding.Criterion.Split('.')[0] switch
    {
        "suitability" or "reading" => "Measurement",
        "identity" => "Identity",
        _ => "Amounts",
    };
}
