namespace Qc.Engine.Structures;

/// <summary>
/// Divides a chemically equivalent group into magnetically equivalent sets: same coupling to every proton outside the set.
/// </summary>
/// <remarks>
/// Rule. Sites x and y are in one set when, for each proton z within five bonds that is not in the set, a symmetry carries x to y
/// and leaves z in place. Both protons of an open-chain CH2 are one set: turning about single bonds averages their couplings
/// (common practice; strictly true only for equally populated rotamers). The protons of a ring CH2 are not: a ring flip averages
/// J(cis) and J(trans) each over the two chair forms, to two different means, so each is tied to the face it is on. The same holds
/// for =CH2. Two protons of one open-chain CH2 as the bystander z are not told apart.
/// Exchangeable protons do not count as z; theirs are one set for each atom.
/// </remarks>
internal static class MagneticSets
{
    // Five bonds from proton to proton: three between the atoms that bear them.
    private const int Reach = 3;

    /// <summary>The sets of a group, each in the order of its sites.</summary>
    public static List<List<ProtonSite>> Of(ProtonFrame frame, List<ProtonSite> group)
    {
        if (group[0].Lability == Lability.Exchangeable)
        {
            return [.. group.GroupBy(site => site.Atom).Select(sites => sites.ToList())];
        }

        List<ProtonSite> outside = [.. frame.Sites.Where(site => site.Lability == Lability.Fixed && !group.Contains(site))];
        List<List<ProtonSite>> sets = Divide(frame, group, outside);
        while (true)
        {
            // Members of the same group count as bystanders as soon as they are in another set.
            List<List<ProtonSite>> finer =
                [.. sets.SelectMany(set => Divide(frame, set, [.. outside, .. group.Where(site => !set.Contains(site))]))];
            if (finer.Count == sets.Count)
            {
                return sets;
            }

            sets = finer;
        }
    }

    private static List<List<ProtonSite>> Divide(ProtonFrame frame, List<ProtonSite> members, List<ProtonSite> bystanders)
    {
        var sets = new List<List<ProtonSite>>();
        foreach (ProtonSite site in members)
        {
            List<ProtonSite>? home = sets.Find(set => CoupleAlike(frame, set[0], site, bystanders));
            if (home is null)
            {
                sets.Add([site]);
            }
            else
            {
                home.Add(site);
            }
        }

        return sets;
    }

    private static bool CoupleAlike(ProtonFrame frame, ProtonSite x, ProtonSite y, List<ProtonSite> bystanders)
    {
        if (x.Atom == y.Atom && IsFree(frame, x.Atom))
        {
            return true;
        }

        IEnumerable<ProtonSite> near = bystanders.Where(z =>
            frame.Distance(x.Atom, z.Atom) <= Reach || frame.Distance(y.Atom, z.Atom) <= Reach);
        return near.All(z => frame.Carries((Seen(frame, x), Seen(frame, y)), (SeenFrom(frame, x, y, z), SeenFrom(frame, x, y, z))));
    }

    private static Spot Seen(ProtonFrame frame, ProtonSite site) =>
        IsFree(frame, site.Atom) ? new Spot(site.Atom, -1) : ProtonFrame.SpotOf(site);

    private static Spot SeenFrom(ProtonFrame frame, ProtonSite x, ProtonSite y, ProtonSite z)
    {
        bool told = !IsFree(frame, z.Atom)
            && (!InRing(frame, z.Atom) || ShareRing(frame, x.Atom, z.Atom) || ShareRing(frame, y.Atom, z.Atom));
        return told ? ProtonFrame.SpotOf(z) : new Spot(z.Atom, -1);
    }

    // An open-chain sp3 atom turns; an atom in a ring or at a double bond does not.
    private static bool IsFree(ProtonFrame frame, int atom) =>
        !InRing(frame, atom) && frame.Molecule.BondsOf(atom).All(bond => frame.Molecule.Bonds[bond].Order == 1);

    private static bool InRing(ProtonFrame frame, int atom) => frame.Molecule.Rings.Any(ring => ring.Contains(atom));

    private static bool ShareRing(ProtonFrame frame, int a, int b) =>
        frame.Molecule.Rings.Any(ring => ring.Contains(a) && ring.Contains(b));
}
