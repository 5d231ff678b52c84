using System.Globalization;
using Qc.Engine.Rivals;

namespace Qc.Engine.Tests.Rivals;

/// <summary>
/// Slow twin of the isomer generator: every way to write bond orders into the matrix of all pairs of atoms, those kept that fit
/// the valences and hang together, and of each the least of all its forms under renumbering. For six heavy atoms at most.
/// </summary>
internal static class MultigraphTwin
{
    /// <summary>Canonical codes of all isomers, each once.</summary>
    public static HashSet<string> All(IsomerFormula formula)
    {
        int[] kinds = [.. formula.Heavy.SelectMany((atoms, kind) => Enumerable.Repeat(kind, atoms.Count))];
        int[] free = [.. kinds.Select(kind => formula.Heavy[kind].Valence)];
        var orders = new int[kinds.Length, kinds.Length];
        var codes = new HashSet<string>();
        Fill(0, 1);
        return codes;

        void Fill(int row, int column)
        {
            if (column == kinds.Length)
            {
                (row, column) = (row + 1, row + 2);
            }

            if (column >= kinds.Length)
            {
                if (free.Sum() == formula.Hydrogens && HangsTogether(orders))
                {
                    codes.Add(Code(kinds, orders));
                }

                return;
            }

            for (int order = 0; order <= Math.Min(3, Math.Min(free[row], free[column])); order++)
            {
                Set(row, column, order, -order);
                Fill(row, column + 1);
                Set(row, column, 0, order);
            }
        }

        void Set(int a, int b, int order, int change)
        {
            orders[a, b] = orders[b, a] = order;
            free[a] += change;
            free[b] += change;
        }
    }

    /// <summary>The code of one graph.</summary>
    public static string CodeOf(IsomerGraph graph)
    {
        var orders = new int[graph.Kinds.Length, graph.Kinds.Length];
        foreach (IsomerBond bond in graph.Bonds)
        {
            orders[bond.A, bond.B] = orders[bond.B, bond.A] = bond.Order;
        }

        return Code([.. graph.Kinds.Select(kind => (int)kind)], orders);
    }

    private static bool HangsTogether(int[,] orders)
    {
        int count = orders.GetLength(0);
        var seen = new HashSet<int> { 0 };
        for (int round = 0; round < count; round++)
        {
            seen.UnionWith([.. Enumerable.Range(0, count).Where(a => seen.Any(b => orders[a, b] > 0))]);
        }

        return seen.Count == count;
    }

    private static string Code(int[] kinds, int[,] orders) =>
        Permutations(kinds.Length).Select(p => Write(kinds, orders, p)).Min(StringComparer.Ordinal)!;

    private static string Write(int[] kinds, int[,] orders, int[] p) => string.Concat(
        p.SelectMany((atom, i) => p.Take(i).Select(other => orders[atom, other]).Prepend(kinds[atom]))
            .Select(number => number.ToString(CultureInfo.InvariantCulture)));

    private static IEnumerable<int[]> Permutations(int count) => count == 0
        ? [[]]
        : Permutations(count - 1).SelectMany(p => Enumerable.Range(0, count).Select(at => (int[])[.. p[..at], count - 1, .. p[at..]]));
}
