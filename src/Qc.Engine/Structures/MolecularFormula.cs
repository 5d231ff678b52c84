using System.Collections.Immutable;
using System.Globalization;

namespace Qc.Engine.Structures;

/// <summary>An element of a formula.</summary>
/// <param name="AtomicNumber">Atomic number.</param>
/// <param name="Isotope">Mass number where one is stated, else 0.</param>
/// <param name="Count">Number of atoms.</param>
public sealed record FormulaPart(int AtomicNumber, int Isotope, int Count);

/// <summary>The molecular formula of a whole structure, salts and solvates included.</summary>
public sealed class MolecularFormula
{
    private MolecularFormula(ImmutableArray<FormulaPart> parts, int charge)
    {
        Parts = parts;
        Charge = charge;
    }

    /// <summary>Elements and isotopes, ascending.</summary>
    public ImmutableArray<FormulaPart> Parts { get; }

    /// <summary>Charge of the whole in units of e.</summary>
    public int Charge { get; }

    /// <summary>
    /// Rings and multiple bonds by the usual valences: 1 + sum of n (v - 2) / 2. A salt's formula counts as one molecule, S and P
    /// as two- and three-valent, so oxides of theirs add none. Null where an element has no usual valence; a half for ions and radicals.
    /// </summary>
    public double? DegreesOfUnsaturation
    {
        get
        {
            double sum = 0;
            foreach (FormulaPart part in Parts)
            {
                if (AtomicWeights.Find(part.AtomicNumber)?.Valence is not { } valence)
                {
                    return null;
                }

                sum += part.Count * (valence - 2);
            }

            return 1 + (sum / 2);
        }
    }

    /// <summary>Counts the atoms of a structure.</summary>
    public static MolecularFormula Of(Molecule molecule)
    {
        var counts = new SortedDictionary<(int Number, int Isotope), int>();
        void Add(int number, int isotope, int count) =>
            counts[(number, isotope)] = counts.GetValueOrDefault((number, isotope)) + count;

        foreach (Atom atom in molecule.Atoms)
        {
            Add(atom.AtomicNumber, atom.Isotope, 1);
            if (atom.HydrogenCount > 0)
            {
                Add(1, 0, atom.HydrogenCount);
            }
        }

        return new MolecularFormula(
            [.. counts.Select(entry => new FormulaPart(entry.Key.Number, entry.Key.Isotope, entry.Value))],
            molecule.Atoms.Sum(atom => atom.FormalCharge));
    }

    /// <summary>
    /// Hill order: carbon, hydrogen, then by symbol; without carbon all by symbol. Deuterium is D after H,
    /// other stated isotopes are in brackets after their element; a charge comes last.
    /// </summary>
    public override string ToString()
    {
        bool organic = Parts.Any(part => part.AtomicNumber == 6);
        IEnumerable<string> parts = Parts
            .OrderBy(part => organic ? part.AtomicNumber switch { 6 => 0, 1 => 1, _ => 2 } : 2)
            .ThenBy(part => SymbolOf(part.AtomicNumber), StringComparer.Ordinal)
            .ThenBy(part => part.Isotope)
            .Select(part => Label(part) + (part.Count > 1 ? part.Count.ToString(CultureInfo.InvariantCulture) : ""));
        string charge = Charge == 0 ? "" : (Math.Abs(Charge) > 1 ? " " + Math.Abs(Charge).ToString(CultureInfo.InvariantCulture) : "") + (Charge > 0 ? "+" : "-");
        return string.Concat(parts) + charge;
    }

    private static string Label(FormulaPart part) => (part.AtomicNumber, part.Isotope) switch
    {
        (1, 2) => "D",
        (_, 0) => SymbolOf(part.AtomicNumber),
        _ => string.Create(CultureInfo.InvariantCulture, $"[{part.Isotope}{SymbolOf(part.AtomicNumber)}]"),
    };

    private static string SymbolOf(int number) =>
        AtomicWeights.Find(number)?.Symbol ?? string.Create(CultureInfo.InvariantCulture, $"(element {number})");
}
