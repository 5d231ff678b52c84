using System.Collections.Immutable;

namespace Qc.Engine.Structures;

/// <summary>What shape holds the neighbours of a stereo unit.</summary>
internal enum StereoShape
{
    /// <summary>Four neighbours round one atom; a mirror reverses it.</summary>
    Tetrahedral,

    /// <summary>Two pairs in one plane, at the ends of a double bond or an amide bond; a mirror leaves it.</summary>
    Planar,

    /// <summary>Two pairs in crossed planes, at the ends of an allene; a mirror reverses it.</summary>
    Axial,
}

/// <summary>
/// An arrangement of four neighbours in space. Neighbours are atom indices or one of the negative stand-ins.
/// Tetrahedral: seen from the first, the others turn clockwise when <paramref name="Sign"/> is +1.
/// Planar: first and third lie on the same side when it is +1; axial: the like, by convention.
/// </summary>
/// <param name="Shape">The shape.</param>
/// <param name="Owners">The atom, or the two ends.</param>
/// <param name="Neighbours">Four: round the atom, or two of one end and two of the other.</param>
/// <param name="Sign">+1 or -1.</param>
/// <param name="IsDrawn">Whether the structure states the arrangement.</param>
internal sealed record StereoUnit(
    StereoShape Shape, ImmutableArray<int> Owners, ImmutableArray<int> Neighbours, int Sign, bool IsDrawn)
{
    /// <summary>Stands for the one hydrogen or the lone pair.</summary>
    public const int Implicit = -1;

    /// <summary>Stands for the hydrogen asked about, of two.</summary>
    public const int Asked = -2;

    /// <summary>Stands for the other hydrogen of two.</summary>
    public const int NotAsked = -3;

    /// <summary>
    /// The arrangement told by the colours of the neighbours alone: +1 or -1, or 0 while two colours that matter are equal.
    /// </summary>
    public int Sense(int[] colours, bool mirrored)
    {
        Span<int> seen = stackalloc int[4];
        for (int i = 0; i < 4; i++)
        {
            seen[i] = Neighbours[i] < 0 ? Neighbours[i] : colours[Neighbours[i]];
        }

        return Shape == StereoShape.Tetrahedral
            ? Sign * Parity(seen) * (mirrored ? -1 : 1)
            : Sign * Math.Sign(seen[0].CompareTo(seen[1])) * Math.Sign(seen[2].CompareTo(seen[3]))
                * (mirrored && Shape == StereoShape.Axial ? -1 : 1);
    }

    /// <summary>A neighbour whose colour equals another's that it must be told from, or -1.</summary>
    public int Tied(int[] colours)
    {
        int ColourOf(int i) => Neighbours[i] < 0 ? Neighbours[i] : colours[Neighbours[i]];
        for (int i = 0; i < 4; i++)
        {
            for (int j = i + 1; j < 4; j++)
            {
                bool matters = Shape == StereoShape.Tetrahedral || i / 2 == j / 2;
                if (matters && ColourOf(i) == ColourOf(j))
                {
                    return Neighbours[i];
                }
            }
        }

        return -1;
    }

    private static int Parity(ReadOnlySpan<int> values)
    {
        int parity = 1;
        for (int i = 0; i < values.Length; i++)
        {
            for (int j = i + 1; j < values.Length; j++)
            {
                parity *= Math.Sign(values[j].CompareTo(values[i]));
            }
        }

        return parity;
    }
}
