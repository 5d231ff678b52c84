namespace Qc.Engine.Rivals;

/// <summary>
/// A small connected multigraph that can grow and shrink by one vertex at a time: vertices carry a kind, edges an order
/// from 1 to 3, or 4 for aromatic. The working form of the isomer generator; at most <see cref="MostVertices"/> vertices.
/// </summary>
internal sealed class LabelledGraph
{
    /// <summary>Vertices fit the bits of a word.</summary>
    public const int MostVertices = 64;

    private const int MostNeighbours = 8;
    private readonly int[] _kind = new int[MostVertices];
    private readonly int[] _degree = new int[MostVertices];
    private readonly int[] _used = new int[MostVertices];
    private readonly ulong[] _mask = new ulong[MostVertices];
    private readonly int[] _neighbour = new int[MostVertices * MostNeighbours];
    private readonly int[] _order = new int[MostVertices * MostNeighbours];

    /// <summary>Number of vertices.</summary>
    public int Count { get; private set; }

    /// <summary>Kind of a vertex.</summary>
    public int Kind(int vertex) => _kind[vertex];

    /// <summary>Number of neighbours of a vertex.</summary>
    public int Degree(int vertex) => _degree[vertex];

    /// <summary>Sum of the orders of a vertex's edges.</summary>
    public int Used(int vertex) => _used[vertex];

    /// <summary>Neighbour number <paramref name="i"/> of a vertex.</summary>
    public int Neighbour(int vertex, int i) => _neighbour[(vertex * MostNeighbours) + i];

    /// <summary>Order of the edge to that neighbour.</summary>
    public int Order(int vertex, int i) => _order[(vertex * MostNeighbours) + i];

    /// <summary>Neighbours as bits.</summary>
    public ulong Mask(int vertex) => _mask[vertex];

    /// <summary>Forgets all vertices.</summary>
    public void Clear() => Count = 0;

    /// <summary>Adds a vertex without edges and returns it.</summary>
    public int AddVertex(int kind)
    {
        int vertex = Count++;
        _kind[vertex] = kind;
        _degree[vertex] = 0;
        _used[vertex] = 0;
        _mask[vertex] = 0;
        return vertex;
    }

    /// <summary>Joins two vertices that are not joined yet.</summary>
    public void Join(int a, int b, int order)
    {
        Attach(a, b, order);
        Attach(b, a, order);
    }

    /// <summary>Removes the last vertex; its edges must be the last that were joined.</summary>
    public void RemoveLast()
    {
        int last = --Count;
        for (int i = 0; i < _degree[last]; i++)
        {
            int other = Neighbour(last, i);
            _degree[other]--;
            _used[other] -= Order(last, i);
            _mask[other] &= ~(1ul << last);
        }
    }

    /// <summary>Order of the edge between two vertices, 0 for none.</summary>
    public int OrderBetween(int a, int b)
    {
        for (int i = 0; i < _degree[a]; i++)
        {
            if (Neighbour(a, i) == b)
            {
                return Order(a, i);
            }
        }

        return 0;
    }

    /// <summary>Whether the rest hangs together when a vertex is taken away.</summary>
    public bool CanSpare(int vertex)
    {
        if (_degree[vertex] <= 1)
        {
            return true;
        }

        ulong all = (Count == MostVertices ? ulong.MaxValue : (1ul << Count) - 1) & ~(1ul << vertex);
        ulong reached = _mask[vertex] & (0 - _mask[vertex]);
        ulong front = reached;
        while (front != 0)
        {
            ulong next = 0;
            for (ulong left = front; left != 0; left &= left - 1)
            {
                next |= _mask[System.Numerics.BitOperations.TrailingZeroCount(left)];
            }

            front = next & all & ~reached;
            reached |= front;
        }

        return reached == all;
    }

    /// <summary>Whether exchanging two vertices changes nothing: same kind, and the same edges to all others.</summary>
    public bool AreTwins(int a, int b)
    {
        ulong apart = ~((1ul << a) | (1ul << b));
        if (_kind[a] != _kind[b] || _degree[a] != _degree[b] || (_mask[a] & apart) != (_mask[b] & apart))
        {
            return false;
        }

        for (int i = 0; i < _degree[a]; i++)
        {
            int other = Neighbour(a, i);
            if (other != b && OrderBetween(b, other) != Order(a, i))
            {
                return false;
            }
        }

        return true;
    }

    private void Attach(int from, int to, int order)
    {
        int slot = (from * MostNeighbours) + _degree[from]++;
        _neighbour[slot] = to;
        _order[slot] = order;
        _used[from] += order;
        _mask[from] |= 1ul << to;
    }
}
