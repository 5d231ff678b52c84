using System.Collections.Immutable;

namespace Qc.Engine.Prediction.Environments;

/// <summary>
/// The notation by which a table row says which atoms it is about: a tree of atoms, written from the atom that bears
/// the protons (or, for a substituent, from the atom that is attached).
/// </summary>
/// <remarks>
/// <code>
/// pattern   = atom { "(" bond pattern ")" } [ bond pattern ]
/// bond      = "-" single | "=" double | "#" triple | ":" aromatic | "~" any; never left out
/// atom      = symbol | "[" symbol { "," symbol } { ";" property } "]" | "{" name "}" ; then "@" on the far atom of a coupling
/// symbol    = element, e.g. C O Cl (not aromatic) | c n o s (aromatic) | "*" any | "X" F, Cl, Br or I | "Q" neither C nor H
/// property  = H0 .. H4 hydrogens | D1 .. D4 heavy neighbours | D+ two of them or more | sp sp2 sp3 | r in a ring | r0 in none | r3 .. r9 in a ring of that size
///           | R1 in one ring only | R2 in two or more | + | - | 0 charge
/// name      = a substituent of Data/substituents.tsv, or a class that it belongs to
/// </code>
/// "[C;H2](-[C;H3])-{OCOR}" is the CH2 of an ethyl ester. Atoms of a match are distinct; nothing is said about what is not written.
/// </remarks>
internal sealed class EnvironmentPattern
{
    private readonly ImmutableArray<PatternAtom> _atoms;

    internal EnvironmentPattern(string text, ImmutableArray<PatternAtom> atoms)
    {
        Text = text;
        _atoms = atoms;
        Detail = atoms.Sum(atom => 2 + atom.Properties.Sum(property => property[0] == 'r' ? 5 : 1));
        End = -1;
        for (int i = 0; i < atoms.Length; i++)
        {
            End = atoms[i].IsEnd ? i : End;
        }
    }

    /// <summary>The pattern as written.</summary>
    public string Text { get; }

    /// <summary>Position in a match of the atom marked "@", or -1.</summary>
    public int End { get; }

    /// <summary>Whether the pattern names a substituent.</summary>
    public bool UsesVocabulary => _atoms.Any(atom => atom.Substituent is not null);

    /// <summary>Names of substituents that the pattern uses.</summary>
    public IEnumerable<string> SubstituentNames => _atoms.Where(atom => atom.Substituent is not null).Select(atom => atom.Substituent!);

    /// <summary>Number of bonds between the root and the atom marked "@" (0 where none is marked).</summary>
    public int Span
    {
        get
        {
            int span = 0;
            for (int i = End; i > 0; i = _atoms[i].Parent)
            {
                span++;
            }

            return span;
        }
    }

    /// <summary>How much the pattern says: two for an atom, one for a property, five for a ring (it matters more than a neighbour).</summary>
    public int Detail { get; }

    /// <summary>
    /// All ways to lay the pattern on the molecule with its root at <paramref name="root"/>, atoms in written order.
    /// The walk never goes to <paramref name="from"/> (the atom that a substituent hangs on; -1 for none).
    /// </summary>
    public IEnumerable<ImmutableArray<int>> Matches(PerceivedMolecule molecule, int root, int from = -1)
    {
        if (!_atoms[0].Accepts(molecule, root, from))
        {
            yield break;
        }

        var laid = new int[_atoms.Length];
        laid[0] = root;
        foreach (ImmutableArray<int> match in Extend(molecule, laid, 1, from))
        {
            yield return match;
        }
    }

    /// <summary>Whether the pattern can be laid on the molecule with its root at <paramref name="root"/>.</summary>
    public bool IsAt(PerceivedMolecule molecule, int root, int from = -1) => Matches(molecule, root, from).Any();

    private IEnumerable<ImmutableArray<int>> Extend(PerceivedMolecule molecule, int[] laid, int next, int from)
    {
        if (next == _atoms.Length)
        {
            yield return [.. laid];
            yield break;
        }

        PatternAtom atom = _atoms[next];
        int parent = laid[atom.Parent];
        foreach (int candidate in molecule.Neighbours(parent))
        {
            if (candidate == from
                || laid.AsSpan(0, next).Contains(candidate)
                || !atom.AcceptsBond(molecule.BondBetween(parent, candidate))
                || !atom.Accepts(molecule, candidate, parent))
            {
                continue;
            }

            laid[next] = candidate;
            foreach (ImmutableArray<int> match in Extend(molecule, laid, next + 1, from))
            {
                yield return match;
            }
        }
    }
}
