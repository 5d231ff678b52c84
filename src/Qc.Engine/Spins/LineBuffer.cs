using System.Runtime.InteropServices;

namespace Qc.Engine.Spins;

/// <summary>
/// Lines of one cluster while they are worked on. Each line may carry a row with the derivatives of its frequency.
/// </summary>
internal sealed class LineBuffer(int rowLength)
{
    private readonly List<double> _rows = [];
    private readonly List<Transition> _lines = [];

    public int Count => _lines.Count;

    public int RowLength => rowLength;

    public Transition this[int line] => _lines[line];

    public ReadOnlySpan<double> Row(int line) => WritableRow(line);

    public Span<double> WritableRow(int line) =>
        CollectionsMarshal.AsSpan(_rows).Slice(line * rowLength, rowLength);

    /// <summary>Adds a line; its row is zero and returned to be filled in.</summary>
    public Span<double> Add(Transition line)
    {
        _lines.Add(line);
        int start = _rows.Count;
        CollectionsMarshal.SetCount(_rows, start + rowLength);
        Span<double> row = CollectionsMarshal.AsSpan(_rows).Slice(start, rowLength);
        row.Clear();
        return row;
    }

    /// <summary>Scales every intensity so that they sum to <paramref name="total"/>.</summary>
    public void Normalise(double total)
    {
        double sum = 0;
        foreach (Transition line in _lines)
        {
            sum += line.Intensity;
        }

        double factor = total / sum;
        for (int i = 0; i < _lines.Count; i++)
        {
            _lines[i] = _lines[i] with { Intensity = _lines[i].Intensity * factor };
        }
    }

    /// <summary>
    /// The lines ordered by site and frequency, those of one site that lie within <paramref name="hertz"/> of the first
    /// of their bunch made one: intensities add, frequency and row become the intensity-weighted mean.
    /// </summary>
    public LineBuffer Merged(double hertz)
    {
        var order = new int[Count];
        var keys = new (int Site, double Frequency, int Index)[Count];
        for (int i = 0; i < Count; i++)
        {
            order[i] = i;
            keys[i] = (_lines[i].Site, _lines[i].FrequencyHertz, i);
        }

        Array.Sort(keys, order);
        var merged = new LineBuffer(rowLength);
        for (int start = 0; start < order.Length;)
        {
            Transition first = _lines[order[start]];
            int end = start + 1;
            double intensity = first.Intensity;
            double moment = 0;
            while (end < order.Length && _lines[order[end]].Site == first.Site
                && _lines[order[end]].FrequencyHertz - first.FrequencyHertz <= hertz)
            {
                Transition next = _lines[order[end]];
                intensity += next.Intensity;
                moment += next.Intensity * (next.FrequencyHertz - first.FrequencyHertz);
                end++;
            }

            Span<double> row = merged.Add(new Transition(first.FrequencyHertz + moment / intensity, intensity, first.Site));
            for (int k = start; k < end; k++)
            {
                double share = _lines[order[k]].Intensity / intensity;
                ReadOnlySpan<double> part = Row(order[k]);
                for (int p = 0; p < row.Length; p++)
                {
                    row[p] += share * part[p];
                }
            }

            start = end;
        }

        return merged;
    }
}
