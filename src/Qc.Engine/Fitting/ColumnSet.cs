using MathNet.Numerics.LinearAlgebra;

namespace Qc.Engine.Fitting;

/// <summary>
/// Columns of a design matrix over a grid. A line touches few points, so each column knows which blocks of the grid it
/// touches, and products are formed block by block.
/// </summary>
internal sealed class ColumnSet
{
    private readonly FitGrid _grid;
    private readonly double[]?[] _values;
    private readonly bool[][] _touched;

    public ColumnSet(FitGrid grid, int count)
    {
        _grid = grid;
        _values = new double[count][];
        _touched = new bool[count][];
    }

    /// <summary>The values of a column, marked as touched over a range of points.</summary>
    public double[] Touch(int column, int first, int end)
    {
        double[] values = _values[column] ??= new double[_grid.Count];
        bool[] touched = _touched[column] ??= new bool[_grid.BlockCount];
        for (int block = first / FitGrid.BlockSize; block * FitGrid.BlockSize < end; block++)
        {
            touched[block] = true;
        }

        return values;
    }

    /// <summary>Σ c_a column_a.</summary>
    public double[] Sum(double[] amplitudes)
    {
        var sum = new double[_grid.Count];
        for (int a = 0; a < _values.Length; a++)
        {
            double[]? values = _values[a];
            if (values is null || amplitudes[a] == 0)
            {
                continue;
            }

            for (int i = 0; i < sum.Length; i++)
            {
                sum[i] += amplitudes[a] * values[i];
            }
        }

        return sum;
    }

    /// <summary>Measured minus modelled.</summary>
    public double[] Residual(double[] amplitudes)
    {
        double[] residual = Sum(amplitudes);
        for (int i = 0; i < residual.Length; i++)
        {
            residual[i] = _grid.Intensity[i] - residual[i];
        }

        return residual;
    }

    public double HalfSumOfSquares(double[] amplitudes)
    {
        double[] residual = Residual(amplitudes);
        double sum = 0;
        for (int i = 0; i < residual.Length; i++)
        {
            double z = residual[i] * _grid.Weight[i];
            sum += z * z;
        }

        return 0.5 * sum;
    }

    /// <summary>Adds ΦᵀWΦ and ΦᵀWy.</summary>
    public void AccumulateLinear(Matrix<double> normal, Vector<double> right) =>
        Accumulate(_grid, [(this, 0)], _grid.Intensity, normal, right);

    /// <summary>Adds JᵀWJ and JᵀWr for J = [derivatives | amplitudes].</summary>
    public static void AccumulateJoint(
        FitGrid grid, ColumnSet derivatives, ColumnSet amplitudes, double[] residual, Matrix<double> normal, Vector<double> right) =>
        Accumulate(grid, [(derivatives, 0), (amplitudes, derivatives._values.Length)], residual, normal, right);

    private static void Accumulate(
        FitGrid grid, (ColumnSet Set, int Offset)[] parts, double[] target, Matrix<double> normal, Vector<double> right)
    {
        var active = new List<(double[] Values, int Index)>();
        var weighted = new double[FitGrid.BlockSize];
        for (int block = 0; block < grid.BlockCount; block++)
        {
            active.Clear();
            foreach ((ColumnSet set, int offset) in parts)
            {
                for (int c = 0; c < set._values.Length; c++)
                {
                    if (set._values[c] is { } values && set._touched[c][block])
                    {
                        active.Add((values, c + offset));
                    }
                }
            }

            int first = block * FitGrid.BlockSize;
            int count = Math.Min(FitGrid.BlockSize, grid.Count - first);
            for (int a = 0; a < active.Count; a++)
            {
                (double[] values, int index) = active[a];
                double projected = 0;
                for (int i = 0; i < count; i++)
                {
                    double w = grid.Weight[first + i];
                    weighted[i] = values[first + i] * w * w;
                    projected += weighted[i] * target[first + i];
                }

                right[index] += projected;
                for (int b = a; b < active.Count; b++)
                {
                    (double[] others, int other) = active[b];
                    double product = 0;
                    for (int i = 0; i < count; i++)
                    {
                        product += weighted[i] * others[first + i];
                    }

                    normal[index, other] += product;
                    if (other != index)
                    {
                        normal[other, index] += product;
                    }
                }
            }
        }
    }
}
