namespace Qc.Engine.Prediction;

/// <summary>
/// What the rows' own uncertainties do not say: how much less a value is worth when it is used away from where it was measured.
/// Set on the fit half of tests/reference (see its README), checked on the other half; ppm, k = 1.
/// </summary>
internal static class UncertaintyModel
{
    /// <summary>A row that belongs to another, similar substituent.</summary>
    public const double BorrowedPpm = 0.10;

    /// <summary>Each strong substituent on a carbon beyond the first (sums overshoot).</summary>
    public const double StackedAlphaPpm = 0.25;

    /// <summary>A methine by scheme A, whose alpha values are those of methylene.</summary>
    public const double MethinePpm = 0.25;

    /// <summary>Share of a beta increment that counts for a methine with a strong substituent (scheme C has none there).</summary>
    public const double MethineBetaShare = 0.3;

    /// <summary>A CHXYZ by scheme B.</summary>
    public const double ThreeConstantsPpm = 0.30;

    /// <summary>Three strong substituents on one carbon, by any scheme.</summary>
    public const double ThreeStrongPpm = 0.50;

    /// <summary>A ring for which there is no parent.</summary>
    public const double UnknownRingPpm = 0.25;

    /// <summary>A ring that bears a substituent on another of its carbons, which the parent lacks.</summary>
    public const double SubstitutedRingPpm = 0.12;

    /// <summary>A saturated carbon whose neighbouring groups are in no parent, even where increments exist.</summary>
    public const double NoParentPpm = 0.10;

    /// <summary>A pair of ortho substituents on a benzene ring.</summary>
    public const double OrthoPairPpm = 0.07;

    /// <summary>An amine on a benzene ring with another strong donor or acceptor: their effects do not add.</summary>
    public const double PushPullPpm = 0.10;

    /// <summary>A benzene increment used on another aromatic ring.</summary>
    public const double OtherRingPpm = 0.14;

    /// <summary>A substituent peri to the proton, on the neighbouring ring, for which there is no row.</summary>
    public const double PeriPpm = 0.35;

    /// <summary>An alkene whose geometry is not stated, beside half the difference of the two.</summary>
    public const double NoGeometryPpm = 0.05;

    /// <summary>An alkene with an acceptor on each carbon (sums overshoot).</summary>
    public const double TwoAcceptorsPpm = 0.10;

    /// <summary>A proton with a diastereotopic partner: the two differ by twice this, typically.</summary>
    public const double DiastereotopicPpm = 0.08;

    /// <summary>The same in a substituted ring, where one is axial or beside the substituent.</summary>
    public const double DiastereotopicInRingPpm = 0.35;

    /// <summary>A solvent for which there is no table.</summary>
    public const double UnknownSolventPpm = 0.20;

    /// <summary>Estimates worse than the best by more than this factor are left out of a combination.</summary>
    public const double WorstToBestRatio = 2.0;

    /// <summary>Widest class interval: saturated carbon.</summary>
    public const double SaturatedClassPpm = 1.2;

    /// <summary>Widest class interval: unsaturated carbon.</summary>
    public const double UnsaturatedClassPpm = 1.0;

    /// <summary>Widest class interval: exchangeable protons.</summary>
    public const double ExchangeableClassPpm = 3.0;
}
