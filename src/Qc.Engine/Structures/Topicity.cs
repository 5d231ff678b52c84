using System.Collections.Immutable;
using System.Globalization;

namespace Qc.Engine.Structures;

/// <summary>
/// Proton groups by topicity: homotopic and enantiotopic protons together, diastereotopic ones apart.
/// </summary>
/// <remarks>
/// Protons belong together when a symmetry of the time-averaged molecule carries one to the other (<see cref="SymmetrySearch"/>);
/// what holds its shape on the NMR time scale is said at <see cref="StereoPerception"/>, which exchanges are fast at
/// <see cref="SymmetryGraph"/>. Where the structure leaves a stereocentre or double bond undrawn, protons are together only
/// if they are so in every isomer it may mean (<see cref="UndrawnIsomers"/>).
/// Each component of a salt or solvate is judged by itself: ions part in solution.
/// Of partners, "a" is hydrogen 0 of the lowest atom as <see cref="StereoPerception.HydrogenPair"/> counts.
/// Magnetic equivalence is worked out by <see cref="MagneticSets"/>.
/// </remarks>
public static class Topicity
{
    /// <summary>Groups and magnetically equivalent sets of all protons of the molecule; deuterium is not counted.</summary>
    public static ProtonGroups Groups(Molecule molecule)
    {
        var frame = new ProtonFrame(molecule);
        List<List<ProtonSite>> groups = [.. Split(frame).OrderBy(group => group[0].Atom).ThenBy(group => group[0].Side)];
        var partners = new int[groups.Count];
        for (int g = 0; g < groups.Count; g++)
        {
            partners[g] = groups.FindIndex(other => AreMirrored(groups[g], other));
        }

        ImmutableArray<ProtonGroup> named = [.. groups.Select((group, g) => new ProtonGroup(
            g, Name(group, partners[g] >= 0), AtomsOf(group), group.Sum(site => site.Count), group[0].Lability, partners[g]))];
        var sets = ImmutableArray.CreateBuilder<ProtonSet>();
        for (int g = 0; g < groups.Count; g++)
        {
            foreach (List<ProtonSite> set in MagneticSets.Of(frame, groups[g]))
            {
                ImmutableArray<int> atoms = AtomsOf(set);
                sets.Add(new ProtonSet(sets.Count, g, atoms, set.Sum(site => site.Count)) { Sides = [.. atoms.Select(atom => SideOf(set, atom))] });
            }
        }

        return new ProtonGroups(named, sets.ToImmutable());
    }

    private static List<List<ProtonSite>> Split(ProtonFrame frame)
    {
        var groups = new List<List<ProtonSite>>();
        foreach (ProtonSite site in frame.Sites)
        {
            List<ProtonSite>? home = groups.Find(group => frame.AreEquivalent(group[0], site));
            if (home is null)
            {
                groups.Add([site]);
            }
            else
            {
                home.Add(site);
            }
        }

        return groups;
    }

    // Partners: the same atoms, the other hydrogen of each.
    private static bool AreMirrored(List<ProtonSite> group, List<ProtonSite> other) =>
        group[0].Side >= 0 && group.Count == other.Count
        && group.TrueForAll(site => other.Exists(mate => mate.Atom == site.Atom && mate.Side == 1 - site.Side))
        && !group.Exists(other.Contains);

    private static string Name(List<ProtonSite> group, bool hasPartner) =>
        string.Create(CultureInfo.InvariantCulture, $"H-{group[0].Atom + 1}{(hasPartner ? group[0].Side == 0 ? "a" : "b" : "")}");

    private static int SideOf(List<ProtonSite> set, int atom)
    {
        List<ProtonSite> there = set.FindAll(site => site.Atom == atom);
        return there.Count == 1 ? there[0].Side : -1;
    }

    private static ImmutableArray<int> AtomsOf(List<ProtonSite> sites) => [.. sites.Select(site => site.Atom).Distinct().Order()];
}
