namespace Qc.Engine.Spins;

/// <summary>
/// Splits finished lines by sites that were left out of the Hamiltonian. Such a site j in the state m adds J_ij·m to the
/// frequency of every site i it couples to, which moves a line by Σ_i (∂f/∂ν_i) J_ij m, correct to first order in J_ij.
/// </summary>
internal static class FirstOrderSplitting
{
    /// <summary>A site that moves a line by less than this, in Hz, to either side is ignored.</summary>
    private const double IgnoredHertz = 0.005;

    /// <summary>Lines of a split cluster closer than this are merged, else their number would double with every site.</summary>
    private const double MergeHertz = 0.01;

    /// <param name="lines">Lines with rows that begin with the derivatives by site.</param>
    /// <param name="splitting">The sites.</param>
    /// <param name="couplings">Couplings of the system.</param>
    /// <param name="firstLink">Place in the rows of the derivative by the first link of the first site.</param>
    /// <param name="options">Merging.</param>
    public static LineBuffer Apply(
        LineBuffer lines, StaticSite[] splitting, ReadOnlySpan<double> couplings, int firstLink, SimulationOptions options)
    {
        foreach (StaticSite site in splitting)
        {
            var split = new LineBuffer(lines.RowLength);
            for (int line = 0; line < lines.Count; line++)
            {
                SplitLine(lines, line, site, couplings, firstLink, split);
            }

            lines = split.Merged(Math.Max(MergeHertz, options.MergeHertz));
            firstLink += site.Links.Length;
        }

        return lines;
    }

    private static void SplitLine(
        LineBuffer lines, int line, StaticSite site, ReadOnlySpan<double> couplings, int firstLink, LineBuffer into)
    {
        Transition whole = lines[line];
        double effective = 0;
        foreach ((int place, int coupling) in site.Links)
        {
            effective += lines.Row(line)[place] * couplings[coupling];
        }

        if (0.5 * site.Count * Math.Abs(effective) < IgnoredHertz)
        {
            lines.Row(line).CopyTo(into.Add(whole));
            return;
        }

        for (int k = 0; k <= site.Count; k++)
        {
            double m = 0.5 * site.Count - k;
            double share = CompositeSpin.Binomial(site.Count, k) * Math.Pow(2, -site.Count);
            Span<double> row = into.Add(
                new Transition(whole.FrequencyHertz + effective * m, whole.Intensity * share, whole.Site));
            lines.Row(line).CopyTo(row);
            for (int l = 0; l < site.Links.Length; l++)
            {
                row[firstLink + l] = row[site.Links[l].Site] * m;
            }
        }
    }
}
