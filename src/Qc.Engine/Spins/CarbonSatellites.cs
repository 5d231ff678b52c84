using System.Collections.Immutable;

namespace Qc.Engine.Spins;

/// <summary>A form of a substance with one atom of a rarer isotope.</summary>
/// <param name="System">Its spins.</param>
/// <param name="Share">Share of the molecules that are of this form, 0 … 1.</param>
public sealed record Isotopomer(SpinSystem System, double Share);

/// <summary>The weak lines of molecules with one carbon-13 among the carbons that bear the protons of a site.</summary>
public static class CarbonSatellites
{
    /// <summary>
    /// Mole fraction of carbon-13 in natural carbon, 0.0107 ± 0.0008 (IUPAC representative isotopic composition; from memory).
    /// </summary>
    public const double NaturalAbundance = 0.0107;

    /// <summary>
    /// The labelled form. The protons on the labelled carbon become a site of their own, split by 1J(CH) and moved by the
    /// isotope effect; the others of the site stay, no longer equivalent to them, so that a coupling that never showed before
    /// (12 Hz in maleic acid, say) does now. Carbon-13 itself is not observed.
    /// </summary>
    /// <param name="system">The unlabelled spins; its sites keep their indices, the rest of the site and the carbon come after them.</param>
    /// <param name="site">An observed site.</param>
    /// <param name="protonsOnCarbon">Protons of the site on each of its carbons: 1 to the count of the site, and a divisor of it.</param>
    /// <param name="oneBondHertz">1J(CH), usually +110 to +260 Hz.</param>
    /// <param name="isotopeShiftHertz">How far 13C moves its protons to lower frequency; about 1 to 3 ppb of the field, 0.4 to 1.2 Hz at 400 MHz.</param>
    /// <param name="toRestHertz">Coupling of the labelled protons to the rest of the site.</param>
    /// <param name="abundance">Mole fraction of carbon-13.</param>
    /// <exception cref="ArgumentException">No such observed site, or protons that do not divide over carbons.</exception>
    public static Isotopomer Of(
        SpinSystem system,
        int site,
        int protonsOnCarbon,
        double oneBondHertz,
        double isotopeShiftHertz = 0,
        double toRestHertz = 0,
        double abundance = NaturalAbundance)
    {
        ArgumentNullException.ThrowIfNull(system);
        if (site < 0 || site >= system.Sites.Length || !system.Sites[site].Observed)
        {
            throw new ArgumentException("Satellites belong to an observed site of the system.", nameof(site));
        }

        SpinSite whole = system.Sites[site];
        if (protonsOnCarbon < 1 || protonsOnCarbon > whole.Count || whole.Count % protonsOnCarbon != 0)
        {
            throw new ArgumentException("The protons of a site divide evenly over its carbons.", nameof(protonsOnCarbon));
        }

        int carbons = whole.Count / protonsOnCarbon;
        ImmutableArray<SpinSite> sites = system.Sites.SetItem(
            site, new SpinSite(whole.FrequencyHertz - isotopeShiftHertz, protonsOnCarbon));
        ImmutableArray<SpinCoupling> couplings = system.Couplings;
        if (carbons > 1)
        {
            int rest = sites.Length;
            sites = sites.Add(whole with { Count = whole.Count - protonsOnCarbon });
            couplings =
            [
                .. couplings,
                .. couplings.Where(c => c.SiteA == site && c.SiteB != site).Select(c => c with { SiteA = rest }),
                .. couplings.Where(c => c.SiteB == site && c.SiteA != site).Select(c => c with { SiteB = rest }),
                new SpinCoupling(site, rest, toRestHertz),
            ];
        }

        int carbon = sites.Length;
        double share = carbons * abundance * Math.Pow(1 - abundance, carbons - 1);
        return new Isotopomer(
            new SpinSystem(
                sites.Add(new SpinSite(0, 1, Observed: false)), couplings.Add(new SpinCoupling(site, carbon, oneBondHertz))),
            share);
    }
}
