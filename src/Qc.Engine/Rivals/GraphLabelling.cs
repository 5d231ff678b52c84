namespace Qc.Engine.Rivals;

/// <summary>
/// Canonical form and symmetry orbits of a <see cref="LabelledGraph"/>.
/// </summary>
/// <remarks>
/// Method: individualisation and refinement (B. D. McKay, Congressus Numerantium 30 (1981) 45; McKay and A. Piperno,
/// J. Symb. Comput. 60 (2014) 94, both from memory). Colours are 64-bit hashes of the surroundings. A hash that happened to be
/// shared by unlike vertices would leave a cell larger than need be and cost time, never a wrong answer: cells are split until
/// each holds one vertex, and what is compared is the graph itself written in that order.
/// Automorphisms found (and exchanges of twins) prune branches that are images of branches already walked.
/// </remarks>
internal sealed class GraphLabelling
{
    private const int Size = LabelledGraph.MostVertices;
    private const ulong Individual = 0x9E3779B97F4A7C15;
    private readonly List<int[]> _automorphisms = [];
    private readonly List<int> _path = [];
    private readonly int[] _bestOrder = new int[Size];
    private readonly List<int> _bestCode = [];
    private readonly List<int> _code = [];
    private readonly int[] _position = new int[Size];
    private readonly ulong[][] _colours = [.. Enumerable.Range(0, Size + 1).Select(_ => new ulong[Size])];
    private readonly ulong[] _scratch = new ulong[Size];
    private LabelledGraph _graph = new();

    /// <summary>The vertices in canonical order, after <see cref="Label"/>.</summary>
    public ReadOnlySpan<int> Order => _bestOrder.AsSpan(0, _graph.Count);

    /// <summary>The canonical form, after <see cref="Label"/>: equal for two graphs if and only if they are isomorphic.</summary>
    public int[] Code => [.. _bestCode];

    /// <summary>Finds canonical order, form and automorphisms.</summary>
    public void Label(LabelledGraph graph)
    {
        _graph = graph;
        _automorphisms.Clear();
        _path.Clear();
        _bestCode.Clear();
        Colour(graph, 2, _colours[0]);
        Search(0);
    }

    /// <summary>Whether some automorphism carries one vertex to the other, after <see cref="Label"/>.</summary>
    public bool AreEquivalent(int a, int b)
    {
        Span<int> orbit = stackalloc int[Size];
        Orbits(orbit, fixPath: false);
        return orbit[a] == orbit[b];
    }

    /// <summary>Of each vertex the least that it is equivalent to, after <see cref="Label"/>.</summary>
    public int[] OrbitOfEach()
    {
        Span<int> orbit = stackalloc int[Size];
        Orbits(orbit, fixPath: false);
        return orbit[.._graph.Count].ToArray();
    }

    /// <summary>Hashes of the surroundings of each vertex up to a number of bonds: equal for equivalent vertices.</summary>
    public void Colour(LabelledGraph graph, int rounds, Span<ulong> colours)
    {
        for (int v = 0; v < graph.Count; v++)
        {
            colours[v] = Mix(((ulong)graph.Kind(v) * 64) + ((ulong)graph.Degree(v) * 8) + (ulong)graph.Used(v) + 1);
        }

        for (int round = 0; round < rounds; round++)
        {
            Spread(graph, colours);
        }
    }

    private void Spread(LabelledGraph graph, Span<ulong> colours)
    {
        for (int v = 0; v < graph.Count; v++)
        {
            ulong sum = 0;
            for (int i = 0; i < graph.Degree(v); i++)
            {
                sum += Mix(colours[graph.Neighbour(v, i)] + ((ulong)graph.Order(v, i) * Individual));
            }

            _scratch[v] = Mix(colours[v] + (3 * sum));
        }

        _scratch.AsSpan(0, graph.Count).CopyTo(colours);
    }

    private static ulong Mix(ulong x)
    {
        x = (x ^ (x >> 32)) * 0xD6E8FEB86659FD93;
        x = (x ^ (x >> 29)) * 0xBF58476D1CE4E5B9;
        return x ^ (x >> 32);
    }

    private void Search(int depth)
    {
        int n = _graph.Count;
        ulong[] colours = _colours[depth];
        Span<int> order = stackalloc int[Size];
        int cells = Refine(colours, order[..n]);
        if (cells == n)
        {
            Leaf(order[..n]);
            return;
        }

        (int first, int end) = SmallestCell(colours, order[..n]);
        Span<int> orbit = stackalloc int[Size];
        int known = -1;
        for (int i = first; i < end; i++)
        {
            int vertex = order[i];
            bool isImage = false;
            for (int j = first; j < i && !isImage; j++)
            {
                if (_graph.AreTwins(order[j], vertex))
                {
                    RecordExchange(order[j], vertex);
                    isImage = true;
                }
            }

            if (!isImage && i > first)
            {
                if (known != _automorphisms.Count)
                {
                    Orbits(orbit, fixPath: true);
                    known = _automorphisms.Count;
                }

                for (int j = first; j < i && !isImage; j++)
                {
                    isImage = orbit[order[j]] == orbit[vertex];
                }
            }

            if (!isImage)
            {
                colours.AsSpan(0, n).CopyTo(_colours[depth + 1]);
                _colours[depth + 1][vertex] = Mix(colours[vertex] ^ Individual);
                _path.Add(vertex);
                Search(depth + 1);
                _path.RemoveAt(_path.Count - 1);
            }
        }
    }

    /// <summary>Spreads colours until no cell splits any more; gives the vertices by colour and the number of cells.</summary>
    private int Refine(ulong[] colours, Span<int> order)
    {
        int cells = 0;
        while (true)
        {
            int found = SortByColour(colours, order);
            if (found == _graph.Count || found == cells)
            {
                return found;
            }

            cells = found;
            Spread(_graph, colours);
        }
    }

    private static int SortByColour(ulong[] colours, Span<int> order)
    {
        int cells = 1;
        for (int i = 0; i < order.Length; i++)
        {
            int at = i;
            while (at > 0 && colours[order[at - 1]] > colours[i])
            {
                order[at] = order[at - 1];
                at--;
            }

            order[at] = i;
        }

        for (int i = 1; i < order.Length; i++)
        {
            cells += colours[order[i]] != colours[order[i - 1]] ? 1 : 0;
        }

        return cells;
    }

    private static (int First, int End) SmallestCell(ulong[] colours, ReadOnlySpan<int> order)
    {
        (int First, int End) best = (0, int.MaxValue);
        int first = 0;
        for (int i = 1; i <= order.Length; i++)
        {
            if (i == order.Length || colours[order[i]] != colours[order[first]])
            {
                if (i - first > 1 && i - first < best.End - best.First)
                {
                    best = (first, i);
                }

                first = i;
            }
        }

        return best;
    }

    private void Leaf(ReadOnlySpan<int> order)
    {
        Write(order);
        int comparison = _bestCode.Count == 0
            ? -1
            : System.Runtime.InteropServices.CollectionsMarshal.AsSpan(_code).SequenceCompareTo(
                System.Runtime.InteropServices.CollectionsMarshal.AsSpan(_bestCode));
        if (comparison < 0)
        {
            _bestCode.Clear();
            _bestCode.AddRange(_code);
            order.CopyTo(_bestOrder);
        }
        else if (comparison == 0)
        {
            var image = new int[order.Length];
            for (int i = 0; i < order.Length; i++)
            {
                image[_bestOrder[i]] = order[i];
            }

            _automorphisms.Add(image);
        }
    }

    /// <summary>Writes the graph in an order: of each vertex its kind and the edges to earlier ones.</summary>
    private void Write(ReadOnlySpan<int> order)
    {
        for (int i = 0; i < order.Length; i++)
        {
            _position[order[i]] = i;
        }

        _code.Clear();
        Span<int> edges = stackalloc int[8];
        for (int i = 0; i < order.Length; i++)
        {
            int vertex = order[i];
            int count = 0;
            for (int k = 0; k < _graph.Degree(vertex); k++)
            {
                int position = _position[_graph.Neighbour(vertex, k)];
                if (position < i)
                {
                    edges[count++] = (position * 8) + _graph.Order(vertex, k);
                }
            }

            edges[..count].Sort();
            _code.Add(_graph.Kind(vertex));
            _code.Add(count);
            foreach (int edge in edges[..count])
            {
                _code.Add(edge);
            }
        }
    }

    private void RecordExchange(int a, int b)
    {
        int[] image = [.. Enumerable.Range(0, _graph.Count)];
        (image[a], image[b]) = (b, a);
        _automorphisms.Add(image);
    }

    /// <summary>Orbits under the automorphisms found so far, or under those that leave the path in place.</summary>
    private void Orbits(Span<int> orbit, bool fixPath)
    {
        int n = _graph.Count;
        for (int v = 0; v < n; v++)
        {
            orbit[v] = v;
        }

        foreach (int[] image in _automorphisms)
        {
            if (fixPath && _path.Exists(v => image[v] != v))
            {
                continue;
            }

            for (int v = 0; v < n; v++)
            {
                int a = orbit[v];
                int b = orbit[image[v]];
                if (a != b)
                {
                    int low = Math.Min(a, b);
                    int high = Math.Max(a, b);
                    for (int w = 0; w < n; w++)
                    {
                        orbit[w] = orbit[w] == high ? low : orbit[w];
                    }
                }
            }
        }
    }
}
