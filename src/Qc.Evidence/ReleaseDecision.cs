using System.Collections.Immutable;

namespace Qc.Evidence;

/// <summary>A flagged finding, by the criterion and the subject that name it within a report.</summary>
/// <param name="Criterion">Criterion, e.g. "identity.shift".</param>
/// <param name="Subject">Subject, e.g. "H-4".</param>
public sealed record FlaggedFinding(string Criterion, string Subject);

/// <summary>A reviewer's signed decision on a lot.</summary>
/// <param name="User">Who decided.</param>
/// <param name="Decision">"release", "reject" or "remeasure".</param>
/// <param name="ReportSha256">The report decided on, lower-case hex.</param>
/// <param name="Accepted">Flagged findings that the reviewer accepted.</param>
/// <param name="ContentSha256">SHA-256 of the canonical content the reviewer had on the screen, computed anew from the record.</param>
/// <param name="Signature">The signature.</param>
public sealed record ReviewFact(
    string User,
    string Decision,
    string ReportSha256,
    ImmutableArray<FlaggedFinding> Accepted,
    string ContentSha256,
    SignatureStatement Signature);

/// <summary>What a decision on release rests on, read from the records.</summary>
/// <param name="LotId">The lot.</param>
/// <param name="State">Its state, as the API names it.</param>
/// <param name="Verdict">"pass", "flag", or null where there is none.</param>
/// <param name="Unsuitable">Whether the measurement was not fit to be judged.</param>
/// <param name="ReportSha256">SHA-256 of the canonical report, lower-case hex.</param>
/// <param name="SubmittedBy">"person:{user}" or "key:{id}".</param>
/// <param name="ReleaseByException">Whether the approved specification lets a passed lot go without a reviewer.</param>
/// <param name="Flags">Flagged findings of the report.</param>
/// <param name="Reviews">Reviews, oldest first.</param>
public sealed record ReleaseCase(
    string LotId,
    string State,
    string? Verdict,
    bool Unsuitable,
    string ReportSha256,
    string SubmittedBy,
    bool ReleaseByException,
    ImmutableArray<FlaggedFinding> Flags,
    ImmutableArray<ReviewFact> Reviews);

/// <summary>
/// Whether a lot may have a certificate. Rules: it has been checked, with a verdict on a suitable measurement; then either
/// it passed without a flag, nobody has reviewed it and its specification allows release by exception; or the latest review
/// releases exactly this report, accepts every flag, is signed by the reviewer for this lot and for what was shown, with a
/// meaning that is not rejection, and the reviewer did not submit the lot.
/// </summary>
public sealed class ReleaseDecision
{
    private static readonly string[] StatesAllowed = ["checked", "reviewed", "released"];

    private ReleaseDecision(ImmutableArray<string> obstacles, ReleaseToken? token)
    {
        Obstacles = obstacles;
        Token = token;
    }

    /// <summary>Why not, one plain sentence each; empty where the lot may be released.</summary>
    public ImmutableArray<string> Obstacles { get; }

    /// <summary>The right to issue one certificate; null where there is an obstacle.</summary>
    public ReleaseToken? Token { get; }

    /// <summary>Applies the rules.</summary>
    public static ReleaseDecision Evaluate(ReleaseCase facts)
    {
        var obstacles = ImmutableArray.CreateBuilder<string>();
        Require(StatesAllowed.Contains(facts.State), $"A lot that is {facts.State} cannot be released.");
        Require(facts.Verdict is "pass" or "flag", "There is no verdict.");
        Require(!facts.Unsuitable, "The measurement was not fit to be judged.");
        if (facts.Reviews.IsEmpty)
        {
            Require(facts.ReleaseByException, "The specification asks for a review.");
            Require(facts.Verdict == "pass" && facts.Flags.IsEmpty, "A flagged lot needs a review.");
        }
        else
        {
            CheckReview(facts, facts.Reviews[^1], Require);
        }

        ImmutableArray<string> found = obstacles.ToImmutable();
        return new ReleaseDecision(found, found.IsEmpty ? new ReleaseToken(facts.LotId, facts.ReportSha256, facts.Reviews.IsEmpty) : null);

        void Require(bool met, string obstacle)
        {
            if (!met)
            {
                obstacles.Add(obstacle);
            }
        }
    }

    private static void CheckReview(ReleaseCase facts, ReviewFact review, Action<bool, string> require)
    {
        SignatureStatement signature = review.Signature;
        require(review.Decision == "release", "The latest review does not release the lot.");
        require(review.ReportSha256 == facts.ReportSha256, "The review is about another report.");
        require(
            !string.Equals(facts.SubmittedBy, "person:" + review.User, StringComparison.OrdinalIgnoreCase),
            "The reviewer submitted the lot.");
        require(signature.User == review.User, "The signature is not the reviewer's.");
        require(signature is { SubjectType: "lot" } && signature.SubjectId == facts.LotId, "The signature is on another record.");
        require(signature.ContentSha256 == review.ContentSha256, "The signature is on other content than was reviewed.");
        require(
            signature.Meaning is SignatureMeaning.Reviewed or SignatureMeaning.Approved,
            "The meaning of the signature is neither reviewed nor approved.");
        foreach (FlaggedFinding open in facts.Flags.Except(review.Accepted))
        {
            require(false, $"The reviewer did not accept the flag {open.Criterion} of {open.Subject}.");
        }
    }
}
