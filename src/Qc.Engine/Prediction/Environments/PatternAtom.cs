using System.Collections.Immutable;
using Qc.Engine.Structures;

namespace Qc.Engine.Prediction.Environments;

/// <summary>One atom of an <see cref="EnvironmentPattern"/>: where it hangs, and what it must be.</summary>
/// <param name="Parent">Position of the atom it hangs on; -1 for the root.</param>
/// <param name="Bond">Bond to the parent: one of - = # : ~.</param>
/// <param name="Symbols">Symbols of which one must fit; empty where a substituent is named.</param>
/// <param name="Properties">Properties that must all hold.</param>
/// <param name="Substituent">Name of the substituent that must hang here, else null.</param>
/// <param name="IsEnd">Whether it is the far atom of a coupling.</param>
internal sealed record PatternAtom(
    int Parent,
    char Bond,
    ImmutableArray<string> Symbols,
    ImmutableArray<string> Properties,
    string? Substituent,
    bool IsEnd)
{
    /// <summary>Atomic numbers of the element symbols that patterns may use.</summary>
    internal static readonly ImmutableDictionary<string, int> Elements = new Dictionary<string, int>
    {
        ["B"] = 5, ["C"] = 6, ["N"] = 7, ["O"] = 8, ["F"] = 9, ["Si"] = 14, ["P"] = 15, ["S"] = 16, ["Cl"] = 17,
        ["Se"] = 34, ["Br"] = 35, ["Sn"] = 50, ["I"] = 53,
    }.ToImmutableDictionary();

    /// <summary>Whether the symbol is one of the notation's.</summary>
    internal static bool IsSymbol(string symbol) =>
        symbol is "*" or "X" or "Q" or "c" or "n" or "o" or "s" || Elements.ContainsKey(symbol);

    /// <summary>Whether the property is one of the notation's.</summary>
    internal static bool IsProperty(string property) => property is "sp" or "sp2" or "sp3" or "r" or "D+" or "R1" or "R2" or "+" or "-" or "0"
        || (property.Length == 2 && property[0] is 'H' or 'D' or 'r' && char.IsAsciiDigit(property[^1]));

    /// <summary>Whether an atom of the molecule fits; <paramref name="from"/> is the atom it hangs on.</summary>
    public bool Accepts(PerceivedMolecule molecule, int atom, int from)
    {
        if (Substituent is not null)
        {
            return molecule.SubstituentAt(from, atom).Is(Substituent);
        }

        return Symbols.Any(symbol => Fits(symbol, molecule[atom])) && Properties.All(property => Holds(property, molecule, atom));
    }

    /// <summary>Whether a bond of the molecule fits the written one.</summary>
    public bool AcceptsBond(Bond bond) => Bond switch
    {
        '-' => bond.Order == 1 && !bond.IsAromatic,
        '=' => bond.Order == 2 && !bond.IsAromatic,
        '#' => bond.Order == 3,
        ':' => bond.IsAromatic,
        _ => true,
    };

    private static bool Fits(string symbol, Atom atom) => symbol switch
    {
        "*" => true,
        "X" => atom.AtomicNumber is 9 or 17 or 35 or 53,
        "Q" => atom.AtomicNumber is not (1 or 6),
        "c" => atom.AtomicNumber == 6 && atom.IsAromatic,
        "n" => atom.AtomicNumber == 7 && atom.IsAromatic,
        "o" => atom.AtomicNumber == 8 && atom.IsAromatic,
        "s" => atom.AtomicNumber == 16 && atom.IsAromatic,
        _ => atom.AtomicNumber == Elements[symbol] && !atom.IsAromatic,
    };

    private static bool Holds(string property, PerceivedMolecule molecule, int atom) => property switch
    {
        "sp" => molecule.Hybridisation(atom) == 1,
        "sp2" => molecule.Hybridisation(atom) == 2,
        "sp3" => molecule.Hybridisation(atom) == 3,
        "r" => molecule.RingsOf(atom).Length > 0,
        "R1" => molecule.RingsOf(atom).Length == 1,
        "R2" => molecule.RingsOf(atom).Length > 1,
        "D+" => molecule.Neighbours(atom).Length > 1,
        "r0" => molecule.RingsOf(atom).Length == 0,
        "+" => molecule[atom].FormalCharge > 0,
        "-" => molecule[atom].FormalCharge < 0,
        "0" => molecule[atom].FormalCharge == 0,
        _ => property[0] switch
        {
            'H' => molecule[atom].HydrogenCount == property[1] - '0',
            'D' => molecule.Neighbours(atom).Length == property[1] - '0',
            _ => molecule.RingsOf(atom).Any(ring => molecule.Ring(ring).Length == property[1] - '0'),
        },
    };
}
