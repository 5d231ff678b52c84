namespace Qc.Engine.Spins;

/// <summary>Lines with the derivatives of their frequencies.</summary>
/// <param name="Lines">The lines, ordered by frequency.</param>
/// <param name="SiteCount">Sites of the system.</param>
/// <param name="CouplingCount">Couplings of the system.</param>
/// <param name="BySite">df/dν, row-major: <c>[line * SiteCount + site]</c>; each row sums to 1.</param>
/// <param name="ByCoupling">df/dJ, row-major: <c>[line * CouplingCount + coupling]</c>.</param>
public sealed record LineGradients(
    Transition[] Lines, int SiteCount, int CouplingCount, double[] BySite, double[] ByCoupling)
{
    /// <summary>df/dν of one line, by site.</summary>
    public ReadOnlySpan<double> SitesOf(int line) => BySite.AsSpan(line * SiteCount, SiteCount);

    /// <summary>df/dJ of one line, by coupling.</summary>
    public ReadOnlySpan<double> CouplingsOf(int line) => ByCoupling.AsSpan(line * CouplingCount, CouplingCount);
}
