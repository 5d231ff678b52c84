using System.Collections.Immutable;

namespace Qc.Engine.Structures;

/// <summary>How a proton group exchanges with water and other acids.</summary>
public enum Lability
{
    /// <summary>Bonded to carbon (or silicon): does not exchange.</summary>
    Fixed,

    /// <summary>OH, NH, SH, COOH and the like: broad, movable, absent in D2O and CD3OD.</summary>
    Exchangeable,
}

/// <summary>
/// Magnetically equivalent protons: same shift, and the same coupling to every other set.
/// The protons of a methyl or of a freely turning CH2 are one set; the two ortho protons of a para-substituted benzene are two.
/// </summary>
/// <param name="Index">Position in <see cref="ProtonGroups.Sets"/>.</param>
/// <param name="Group">Index of the chemically equivalent group it belongs to.</param>
/// <param name="Atoms">Indices of the heavy atoms that bear the protons.</param>
/// <param name="Count">Number of protons.</param>
public sealed record ProtonSet(int Index, int Group, ImmutableArray<int> Atoms, int Count)
{
    /// <summary>
    /// For each atom of <see cref="Atoms"/>, 0 or 1 where the set holds just that one of a CH2's two protons
    /// (counted as <see cref="Topicity"/> says), else -1. Empty means -1 throughout.
    /// </summary>
    public ImmutableArray<int> Sides { get; init; } = [];

    /// <summary>The side of the proton on the atom at a position of <see cref="Atoms"/>.</summary>
    public int SideAt(int position) => Sides.IsEmpty ? -1 : Sides[position];
}

/// <summary>Chemically equivalent protons (homotopic or enantiotopic): one shift.</summary>
/// <param name="Index">Position in <see cref="ProtonGroups.Groups"/>.</param>
/// <param name="Name">Name people see: "H-" and the lowest atom number (from 1), with a or b for diastereotopic partners.</param>
/// <param name="Atoms">Indices (from 0) of the heavy atoms that bear the protons, ascending.</param>
/// <param name="Count">Number of protons.</param>
/// <param name="Lability">Whether they exchange.</param>
/// <param name="DiastereotopicPartner">Index of the group of the other protons on the same atoms, else -1.</param>
public sealed record ProtonGroup(
    int Index,
    string Name,
    ImmutableArray<int> Atoms,
    int Count,
    Lability Lability,
    int DiastereotopicPartner = -1);

/// <summary>The protons of a molecule by topicity.</summary>
/// <param name="Groups">Chemically equivalent groups, ordered by lowest atom.</param>
/// <param name="Sets">Magnetically equivalent sets; each group is made of one or more.</param>
public sealed record ProtonGroups(ImmutableArray<ProtonGroup> Groups, ImmutableArray<ProtonSet> Sets);
