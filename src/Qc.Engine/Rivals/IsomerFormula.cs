using System.Collections.Immutable;
using System.Globalization;
using Qc.Engine.Structures;

namespace Qc.Engine.Rivals;

/// <summary>An element with the valence it has in every structure generated, e.g. C 4, S 2 or S 6.</summary>
/// <param name="AtomicNumber">Atomic number.</param>
/// <param name="Valence">Sum of bond orders, hydrogens included.</param>
/// <param name="Count">Number of such atoms.</param>
public sealed record IsomerAtoms(int AtomicNumber, int Valence, int Count);

/// <summary>What isomers are made of: heavy atoms by element and valence, and hydrogens.</summary>
public sealed class IsomerFormula
{
    private IsomerFormula(ImmutableArray<IsomerAtoms> heavy, int hydrogens)
    {
        Heavy = heavy;
        Hydrogens = hydrogens;
    }

    /// <summary>Heavy atoms, by falling valence and then by atomic number: the generator adds them about in this order.</summary>
    public ImmutableArray<IsomerAtoms> Heavy { get; }

    /// <summary>Number of hydrogens.</summary>
    public int Hydrogens { get; }

    /// <summary>Number of heavy atoms.</summary>
    public int HeavyCount => Heavy.Sum(atoms => atoms.Count);

    /// <summary>Sum of the orders of all bonds between heavy atoms, from the valences; null where no structure is possible.</summary>
    public int? BondOrders
    {
        get
        {
            int free = Heavy.Sum(atoms => atoms.Count * atoms.Valence) - Hydrogens;
            return free >= 2 * (HeavyCount - 1) && free % 2 == 0 ? free / 2 : null;
        }
    }

    /// <summary>
    /// The formula of a structure with the valences that its atoms have there. Null where it has charges, isotopes or several
    /// components, since isomers of those are another question, or no heavy atom.
    /// </summary>
    public static IsomerFormula? Of(Molecule molecule)
    {
        if (molecule.Atoms.IsEmpty
            || molecule.Atoms.Any(atom => atom.FormalCharge != 0 || atom.Isotope != 0 || atom.AtomicNumber == 1)
            || !IsConnected(molecule))
        {
            return null;
        }

        return Sorted(
            molecule.Atoms.Select(atom => (atom.AtomicNumber, atom.HydrogenCount + molecule.BondsOf(atom.Index).Sum(bond => molecule.Bonds[bond].Order))),
            molecule.Atoms.Sum(atom => atom.HydrogenCount));
    }

    /// <summary>
    /// Reads a formula such as "C5H10O2", every element with its usual valence (Data/atomic-weights.tsv: S two, P three).
    /// Null where the text is no such formula or an element has no usual valence.
    /// </summary>
    public static IsomerFormula? Parse(string text)
    {
        var atoms = new List<(int Number, int Valence)>();
        int hydrogens = 0;
        int at = 0;
        while (at < text.Length)
        {
            int symbolEnd = at + 1;
            while (symbolEnd < text.Length && char.IsAsciiLetterLower(text[symbolEnd]))
            {
                symbolEnd++;
            }

            int numberEnd = symbolEnd;
            while (numberEnd < text.Length && char.IsAsciiDigit(text[numberEnd]))
            {
                numberEnd++;
            }

            int count = 1;
            if ((numberEnd > symbolEnd && !int.TryParse(text.AsSpan(symbolEnd, numberEnd - symbolEnd), NumberStyles.None, CultureInfo.InvariantCulture, out count))
                || count is < 1 or > 1000
                || NumberOf(text[at..symbolEnd]) is not { } number
                || AtomicWeights.Find(number)?.Valence is not { } valence)
            {
                return null;
            }

            hydrogens += number == 1 ? count : 0;
            atoms.AddRange(Enumerable.Repeat((number, valence), number == 1 ? 0 : count));
            at = numberEnd;
        }

        return atoms.Count == 0 ? null : Sorted(atoms, hydrogens);
    }

    private static IsomerFormula Sorted(IEnumerable<(int Number, int Valence)> atoms, int hydrogens) => new(
        [
            .. atoms.GroupBy(atom => atom)
                .OrderByDescending(group => group.Key.Valence).ThenBy(group => group.Key.Number)
                .Select(group => new IsomerAtoms(group.Key.Number, group.Key.Valence, group.Count())),
        ],
        hydrogens);

    private static int? NumberOf(string symbol)
    {
        const int lastElement = 118;
        for (int number = 1; number <= lastElement; number++)
        {
            if (AtomicWeights.Find(number)?.Symbol == symbol)
            {
                return number;
            }
        }

        return null;
    }

    private static bool IsConnected(Molecule molecule)
    {
        var seen = new HashSet<int> { 0 };
        var queue = new Queue<int>(seen);
        while (queue.TryDequeue(out int atom))
        {
            foreach (int next in molecule.NeighboursOf(atom).Where(seen.Add))
            {
                queue.Enqueue(next);
            }
        }

        return seen.Count == molecule.Atoms.Length;
    }
}
