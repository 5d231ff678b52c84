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
    /// The lines ordered by frequency, those of one site that lie within <paramref name="hertz"/> of the first
    /// of their bunch made one: intensities add, frequency and row become the intensity-weighted mean.
    /// </summary>
    public LineBuffer Merged(double hertz)
    {
        var order = new int[Count];
        var frequencies = new double[Count];
        int sites = 0;
        for (int i = 0; i < Count; i++)
        {
            order[i] = i;
            frequencies[i] = _lines[i].FrequencyHertz;
            sites = Math.Max(sites, _lines[i].Site + 1);
        }

        Array.Sort(frequencies, order);

        // While the lines pass in order, each site has at most one bunch that can still grow.
        var merged = new LineBuffer(rowLength);
        var bunch = new int[sites];
        var first = new double[sites];
        Array.Fill(bunch, -1);
        foreach (int index in order)
        {
            Transition line = _lines[index];
            if (bunch[line.Site] >= 0 && line.FrequencyHertz - first[line.Site] <= hertz)
            {
                merged.Blend(bunch[line.Site], line, Row(index));
            }
            else
            {
                bunch[line.Site] = merged.Count;
                first[line.Site] = line.FrequencyHertz;
                Row(index).CopyTo(merged.Add(line));
            }
        }

        return merged;
    }

    private void Blend(int target, Transition line, ReadOnlySpan<double> lineRow)
    {
        Transition old = _lines[target];
        double intensity = old.Intensity + line.Intensity;
        double share = line.Intensity / intensity;
        double frequency = old.FrequencyHertz + share * (line.FrequencyHertz - old.FrequencyHertz);
        _lines[target] = new Transition(frequency, intensity, old.Site);
        Span<double> row = WritableRow(target);
        for (int p = 0; p < row.Length; p++)
        {
            row[p] += share * (lineRow[p] - row[p]);
        }
    }
}
