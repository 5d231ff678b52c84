using Qc.Engine.Structures;

namespace Qc.Engine.Rivals;

/// <summary>
/// What an isomer keeps of the expected structure before it is called a rival: its charged atoms with their neighbours, so that a
/// nitro group stays one and no zwitterion is invented; its sulfur and phosphorus atoms of high valence with what they are doubly
/// bound to, so that a sulfone or sulfonamide stays one; and the formulas of its parts, so that a salt or solvate exchanges no
/// atoms between acid and base.
/// </summary>
internal static class ChargesAndParts
{
    /// <summary>A text that is the same for structures that agree in both.</summary>
    public static string Of(Molecule molecule)
    {
        IEnumerable<string> charged = molecule.Atoms
            .Where(atom => atom.FormalCharge != 0)
            .Select(atom => $"{atom.AtomicNumber},{atom.FormalCharge}({string.Join(',', Neighbours(molecule, atom.Index).Order(StringComparer.Ordinal))})")
            .Order(StringComparer.Ordinal);
        IEnumerable<string> highValence = molecule.Atoms
            .Where(atom => IsHighValence(molecule, atom))
            .Select(atom => $"{atom.AtomicNumber}H{atom.HydrogenCount}({string.Join(',', Neighbours(molecule, atom.Index).Where(n => n[0] != '1').Order(StringComparer.Ordinal))})")
            .Order(StringComparer.Ordinal);
        return $"{string.Join(';', charged)}|{string.Join(';', highValence)}|{string.Join(';', Parts(molecule).Order(StringComparer.Ordinal))}";
    }

    private static bool IsHighValence(Molecule molecule, Atom atom)
    {
        int usual = atom.AtomicNumber switch { 15 => 3, 16 => 2, _ => int.MaxValue };
        return usual < int.MaxValue && molecule.BondsOf(atom.Index).Sum(bond => molecule.Bonds[bond].Order) + atom.HydrogenCount > usual;
    }

    private static IEnumerable<string> Neighbours(Molecule molecule, int atom) =>
        molecule.BondsOf(atom).Select(bond => (Bond: molecule.Bonds[bond], Other: molecule.Atoms[molecule.Other(bond, atom)]))
            .Select(pair => $"{pair.Bond.Order}-{pair.Other.AtomicNumber},{pair.Other.FormalCharge}");

    private static IEnumerable<string> Parts(Molecule molecule)
    {
        var seen = new bool[molecule.Atoms.Length];
        for (int start = 0; start < seen.Length; start++)
        {
            if (seen[start])
            {
                continue;
            }

            var counts = new SortedDictionary<int, int>();
            var waiting = new Stack<int>([start]);
            seen[start] = true;
            while (waiting.TryPop(out int atom))
            {
                int element = molecule.Atoms[atom].AtomicNumber;
                counts[element] = counts.GetValueOrDefault(element) + 1;
                foreach (int next in molecule.NeighboursOf(atom).Where(next => !seen[next]))
                {
                    seen[next] = true;
                    waiting.Push(next);
                }
            }

            yield return string.Join(',', counts.Select(pair => $"{pair.Key}x{pair.Value}"));
        }
    }
}
