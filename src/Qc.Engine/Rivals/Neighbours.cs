using System.Collections.Immutable;
using Qc.Engine.Structures;

namespace Qc.Engine.Rivals;

/// <summary>How a rival is related to the expected structure; nearest first.</summary>
public enum RivalOrigin
{
    /// <summary>Same constitution: the E/Z partner or a diastereomer.</summary>
    Stereoisomer,

    /// <summary>One edit: a group or a CH2 moved, two groups exchanged, a double bond shifted.</summary>
    OneEdit,

    /// <summary>Two edits.</summary>
    TwoEdits,

    /// <summary>Another isomer, from the complete list.</summary>
    Isomer,
}

/// <summary>A structure that could be taken for the expected one.</summary>
/// <param name="Structure">The structure; where edited or generated, with no arrangement in space stated.</param>
/// <param name="Origin">How it is related.</param>
public sealed record RivalCandidate(Molecule Structure, RivalOrigin Origin);

/// <summary>How far the search for rivals goes.</summary>
public sealed record NeighbourOptions
{
    /// <summary>Most structures from edits.</summary>
    public int MostEdited { get; init; } = 200;

    /// <summary>Whether structures two edits away are looked at as well as those one edit away.</summary>
    public bool TwoEdits { get; init; } = true;

    /// <summary>
    /// What every lot is tested against: stereoisomers and structures one edit away, the mix-ups that a plant meets. The rest
    /// belongs to the specificity of the method, which is worked out once and not with every lot.
    /// </summary>
    public static NeighbourOptions Nearest { get; } = new() { TwoEdits = false, MostHeavyAtomsListed = 0 };

    /// <summary>The complete list of isomers is added up to this many heavy atoms ...</summary>
    public int MostHeavyAtomsListed { get; init; } = 9;

    /// <summary>... and only if it has no more than this many structures before filters: a list cut short would only seem complete.</summary>
    public int MostListed { get; init; } = 2_000;

    /// <summary>... and no more than this many after filters: predicting them all must stay a matter of a fraction of a second.</summary>
    public int MostKept { get; init; } = 300;

    /// <summary>Structures left out.</summary>
    public RivalFilters Filters { get; init; } = RivalFilters.Default;
}

/// <summary>Rivals of a structure and how complete they are.</summary>
/// <param name="Candidates">The rivals, nearest first.</param>
/// <param name="IsComplete">Whether all isomers that the filters keep are among them.</param>
public sealed record RivalCandidates(ImmutableArray<RivalCandidate> Candidates, bool IsComplete);

/// <summary>
/// The structures nearest to an expected one, each once: stereoisomers, then what one and two edits make of it, then, for small
/// formulas, every other isomer. Always the same for the same structure.
/// </summary>
public static class Neighbours
{
    /// <summary>Two-edit structures tried at most, so that a large molecule costs no more than a small one.</summary>
    private const int MostTried = 2_000;

    /// <summary>
    /// The rivals of a structure. None for more than <see cref="StructureForm.MostAtoms"/> heavy atoms. Tautomers that differ only in
    /// which heteroatom bears a hydrogen are one substance and no rivals of one another; nor are mirror images.
    /// </summary>
    /// <exception cref="OperationCanceledException">The caller gave up.</exception>
    public static RivalCandidates Of(Molecule expected, NeighbourOptions options, CancellationToken cancellation = default)
    {
        if (expected.Atoms.Length is 0 or > StructureForm.MostAtoms || expected.Bonds.Length > SmallestRings.MostBonds)
        {
            return new RivalCandidates([], false);
        }

        var found = new List<RivalCandidate>();
        AddStereoisomers(expected, found);
        var known = new KnownStructures(expected, options.Filters);
        List<Molecule> first = AddEdits([expected], RivalOrigin.OneEdit, options.MostEdited, int.MaxValue, known, found, cancellation);
        if (options.TwoEdits)
        {
            AddEdits(first, RivalOrigin.TwoEdits, options.MostEdited - first.Count, MostTried, known, found, cancellation);
        }

        bool isComplete = AddList(expected, options, known, found, cancellation);
        return new RivalCandidates([.. found], isComplete);
    }

    private static void AddStereoisomers(Molecule expected, List<RivalCandidate> found)
    {
        var seen = new HashSet<string> { StructureForm.Of(expected) };
        found.AddRange(StructureEdits.Turned(expected)
            .Where(turned => seen.Add(StructureForm.Of(turned)))
            .Concat(StructureEdits.TurnedOnRings(expected))
            .Select(turned => new RivalCandidate(turned, RivalOrigin.Stereoisomer)));
    }

    private static List<Molecule> AddEdits(
        IEnumerable<Molecule> from, RivalOrigin origin, int most, int mostTried, KnownStructures known, List<RivalCandidate> found, CancellationToken cancellation)
    {
        var added = new List<Molecule>();
        int tried = 0;
        foreach (Molecule edited in from.SelectMany(StructureEdits.All))
        {
            cancellation.ThrowIfCancellationRequested();
            if (added.Count >= most || tried++ >= mostTried)
            {
                break;
            }

            if (known.Admit(edited))
            {
                added.Add(edited);
                found.Add(new RivalCandidate(edited, origin));
            }
        }

        return added;
    }

    private static bool AddList(
        Molecule expected, NeighbourOptions options, KnownStructures known, List<RivalCandidate> found, CancellationToken cancellation)
    {
        if (IsomerFormula.Of(expected) is not { } formula || formula.HeavyCount > options.MostHeavyAtomsListed)
        {
            return false;
        }

        List<IsomerGraph> list = [.. IsomerGenerator.Isomers(formula, cancellation).Take(options.MostListed + 1)];
        if (list.Count > options.MostListed)
        {
            return false;
        }

        cancellation.ThrowIfCancellationRequested();
        RivalCandidate[] others = [.. list.Select(graph => graph.ToMolecule()).Where(known.Admit).Select(isomer => new RivalCandidate(isomer, RivalOrigin.Isomer))];
        if (found.Count + others.Length > options.MostKept)
        {
            return false;
        }

        found.AddRange(others);
        return true;
    }

    /// <summary>Structures seen so far, the expected one and its tautomers from the start.</summary>
    private sealed class KnownStructures(Molecule expected, RivalFilters filters)
    {
        private readonly string _skeleton = StructureForm.SkeletonOf(expected);
        private readonly string _chargesAndParts = ChargesAndParts.Of(expected);
        private readonly HashSet<string> _forms = [];

        public bool Admit(Molecule structure) =>
            _forms.Add(StructureForm.Of(structure))
            && StructureForm.SkeletonOf(structure) != _skeleton
            && ChargesAndParts.Of(structure) == _chargesAndParts
            && filters.Objection(structure) is null;
    }
}
