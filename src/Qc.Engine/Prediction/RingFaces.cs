using System.Collections.Immutable;
using Qc.Engine.Structures;

namespace Qc.Engine.Prediction;

/// <summary>
/// Which face of a ring each substituent and proton is on. "Up" is the side from which the ring's atoms, in their order,
/// run counterclockwise; where a sole stereocentre is undrawn, its hydrogen is put up, since only relations matter.
/// </summary>
/// <remarks>
/// Rule. Looking from the previous ring atom, the next one, the substituent that is up and the one that is down turn clockwise.
/// Windings (<see cref="Winding"/>) and pairs of hydrogens (<see cref="StereoPerception.HydrogenPair"/>) are brought to that
/// order by counting exchanges.
/// </remarks>
internal sealed class RingFaces
{
    private const int Hydrogen = -1;
    private readonly ImmutableArray<int> _ring;
    private readonly Dictionary<int, int> _upper;

    private RingFaces(ImmutableArray<int> ring, Dictionary<int, int> upper)
    {
        _ring = ring;
        _upper = upper;
    }

    /// <summary>The faces, or null where a stereocentre of the ring is not drawn and not the only one.</summary>
    public static RingFaces? Of(Molecule molecule, ImmutableArray<int> ring)
    {
        var upper = new Dictionary<int, int>();
        int centres = 0;
        int undrawn = 0;
        for (int k = 0; k < ring.Length; k++)
        {
            Atom atom = molecule.Atoms[ring[k]];
            (int previous, int next) = (ring[(k + ring.Length - 1) % ring.Length], ring[(k + 1) % ring.Length]);
            List<int> others = [.. molecule.NeighboursOf(atom.Index).Where(other => other != previous && other != next).Order()];
            if (atom.HydrogenCount == 1)
            {
                others.Insert(0, Hydrogen);
            }

            if (atom.AtomicNumber != 6 || others.Count != 2)
            {
                continue;
            }

            bool differ = others[0] == Hydrogen || !AreAlikeEnds(molecule.Atoms[others[0]], molecule.Atoms[others[1]]);
            centres += differ ? 1 : 0;
            undrawn += differ && atom.Winding == Winding.None ? 1 : 0;
            int[] drawn = [.. others.Append(previous).Append(next).Order()];
            bool isEven = IsEven(drawn, [previous, next, others[0], others[1]]);
            bool isFirstUp = atom.Winding == Winding.None || (atom.Winding == Winding.Clockwise) == isEven;
            upper[atom.Index] = isFirstUp ? others[0] : others[1];
        }

        return undrawn == 0 || (undrawn == 1 && centres == 1) ? new RingFaces(ring, upper) : null;
    }

    /// <summary>Whether a substituent (by its first atom) is up.</summary>
    public bool IsUp(int atom, int root) => _upper.TryGetValue(atom, out int up) && up == root;

    /// <summary>Whether the proton of a CH, or the one of a CH2 with this side, is up; null where the atom has no such proton.</summary>
    public bool? IsProtonUp(Atom atom, int side)
    {
        if (atom.HydrogenCount == 1)
        {
            return _upper.TryGetValue(atom.Index, out int up) ? up == Hydrogen : null;
        }

        if (atom.HydrogenCount != 2 || side < 0)
        {
            return null;
        }

        int k = _ring.IndexOf(atom.Index);
        bool isPreviousLower = _ring[(k + _ring.Length - 1) % _ring.Length] < _ring[(k + 1) % _ring.Length];
        return isPreviousLower == (side == 0);
    }

    private static bool AreAlikeEnds(Atom a, Atom b) =>
        a.AtomicNumber == b.AtomicNumber && a.HydrogenCount == b.HydrogenCount && a.HydrogenCount is 0 or 3 && a.AtomicNumber is 6 or 9 or 17 or 35 or 53;

    private static bool IsEven(int[] from, int[] to)
    {
        int[] places = [.. to.Select(atom => Array.IndexOf(from, atom))];
        int inversions = 0;
        for (int i = 0; i < places.Length; i++)
        {
            inversions += places[(i + 1)..].Count(place => place < places[i]);
        }

        return inversions % 2 == 0;
    }
}
