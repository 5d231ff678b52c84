using Xunit;

namespace Qc.Evidence.Tests;

public sealed class ReleaseDecisionTests
{
    private static readonly FlaggedFinding Flag = new("identity.shift", "H-4");

    private static readonly SignatureStatement Signature = new(
        "Ana Lind", "ana", new DateTimeOffset(2026, 1, 2, 3, 4, 5, TimeSpan.Zero), SignatureMeaning.Approved, "lot", "L1", "c0");

    private static readonly ReviewFact Review = new("ana", "release", "r0", [Flag], "c0", Signature);

    private static readonly ReleaseCase Good = new("L1", "reviewed", "flag", false, "r0", "person:bo", false, [Flag], [Review]);

    public static TheoryData<string, ReleaseCase> Refused => new()
    {
        { "state", Good with { State = "rejected" } },
        { "verdict", Good with { Verdict = null } },
        { "suitability", Good with { Unsuitable = true } },
        { "no review", Good with { Reviews = [] } },
        { "flag by exception", Good with { Reviews = [], ReleaseByException = true } },
        { "pass without exception", Good with { Verdict = "pass", Flags = [], Reviews = [] } },
        { "later rejection", Good with { Reviews = [Review, Review with { Decision = "reject" }] } },
        { "other report", Good with { ReportSha256 = "r1" } },
        { "own lot", Good with { SubmittedBy = "person:Ana" } },
        { "open flag", Good with { Flags = [Flag, new("identity.count", "H-2")] } },
        { "other signer", Good with { Reviews = [Review with { Signature = Signature with { User = "bo" } }] } },
        { "other lot signed", Good with { Reviews = [Review with { Signature = Signature with { SubjectId = "L2" } }] } },
        { "other content signed", Good with { Reviews = [Review with { Signature = Signature with { ContentSha256 = "c1" } }] } },
        { "signed as rejected", Good with { Reviews = [Review with { Signature = Signature with { Meaning = SignatureMeaning.Rejected } }] } },
    };

    [Fact]
    public void A_signed_review_that_accepts_every_flag_releases() => Assert.False(ReleaseDecision.Evaluate(Good).Token!.ByException);

    [Fact]
    public void A_passed_lot_goes_by_exception_where_the_specification_says_so() =>
        Assert.True(ReleaseDecision.Evaluate(
            Good with { State = "checked", Verdict = "pass", Flags = [], Reviews = [], ReleaseByException = true }).Token!.ByException);

    [Theory]
    [MemberData(nameof(Refused))]
    public void One_rule_broken_gives_one_obstacle_or_more_and_no_token(string rule, ReleaseCase facts)
    {
        ReleaseDecision decision = ReleaseDecision.Evaluate(facts);
        Assert.True(decision.Token is null, rule);
        Assert.NotEmpty(decision.Obstacles);
    }

    [Fact]
    public void A_token_serves_once_and_for_its_own_lot_only()
    {
        ReleaseToken token = ReleaseDecision.Evaluate(Good).Token!;
        Assert.Throws<InvalidOperationException>(() => token.Use("L2", "r0"));
        token.Use("L1", "r0");
        Assert.Throws<InvalidOperationException>(() => token.Use("L1", "r0"));
    }

    [Fact]
    public void Every_part_of_a_signature_changes_its_hash()
    {
        SignatureStatement[] all =
        [
            Signature,
            Signature with { PrintedName = "A. Lind" },
            Signature with { User = "anb" },
            Signature with { At = Signature.At.AddTicks(10) },
            Signature with { Meaning = SignatureMeaning.Reviewed },
            Signature with { SubjectType = "product" },
            Signature with { SubjectId = "L2" },
            Signature with { ContentSha256 = "c1" },
        ];
        Assert.Equal(all.Length, all.Select(s => s.Sha256()).Distinct().Count());
    }
}
