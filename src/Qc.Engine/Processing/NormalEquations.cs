namespace Qc.Engine.Processing;

/// <summary>
/// JᵀJ and Jᵀr of a least-squares problem, gathered row by row, solved by Cholesky's method on parameters scaled to a unit
/// diagonal, so that Hz and intensities may stand side by side.
/// </summary>
/// <param name="count">Number of parameters.</param>
internal sealed class NormalEquations(int count)
{
    private readonly double[] product = new double[count * count];

    /// <summary>Jᵀr.</summary>
    public double[] Gradient { get; } = new double[count];

    public void Clear()
    {
        Array.Clear(product);
        Array.Clear(Gradient);
    }

    /// <summary>Adds a row of J and its residual.</summary>
    public void Add(ReadOnlySpan<double> row, double left)
    {
        for (int i = 0; i < count; i++)
        {
            double a = row[i];
            Gradient[i] += a * left;
            Span<double> line = product.AsSpan(i * count, i + 1);
            for (int j = 0; j < line.Length; j++)
            {
                line[j] += a * row[j];
            }
        }
    }

    /// <summary>The step for a damping; 0 for held parameters; null where the equations are singular.</summary>
    public double[]? Solve(double damping, bool[] held)
    {
        (double[] factor, double[] scale) = Factor(damping, held);
        if (factor.Length == 0)
        {
            return null;
        }

        var x = new double[count];
        for (int i = 0; i < count; i++)
        {
            x[i] = held[i] ? 0 : Gradient[i] * scale[i];
        }

        Substitute(factor, x);
        for (int i = 0; i < count; i++)
        {
            x[i] *= held[i] ? 0 : scale[i];
        }

        return x;
    }

    /// <summary>(JᵀJ)⁻¹ with zeros for held parameters; null where it is singular.</summary>
    public double[,]? Inverse(bool[] held)
    {
        (double[] factor, double[] scale) = Factor(0, held);
        if (factor.Length == 0)
        {
            return null;
        }

        var inverse = new double[count, count];
        var x = new double[count];
        for (int j = 0; j < count; j++)
        {
            Array.Clear(x);
            x[j] = 1;
            Substitute(factor, x);
            for (int i = 0; i < count; i++)
            {
                inverse[i, j] = held[i] || held[j] ? 0 : x[i] * scale[i] * scale[j];
            }
        }

        return inverse;
    }

    private (double[] Factor, double[] Scale) Factor(double damping, bool[] held)
    {
        var scale = new double[count];
        for (int i = 0; i < count; i++)
        {
            double square = product[(i * count) + i];
            scale[i] = square > 0 ? 1 / Math.Sqrt(square) : 1;
        }

        var factor = new double[count * count];
        for (int i = 0; i < count; i++)
        {
            for (int j = 0; j <= i; j++)
            {
                double sum = i == j ? 1 + damping : held[i] || held[j] ? 0 : product[(i * count) + j] * scale[i] * scale[j];
                for (int k = 0; k < j; k++)
                {
                    sum -= factor[(i * count) + k] * factor[(j * count) + k];
                }

                if (i == j && !(sum > 1e-14))
                {
                    return ([], scale);
                }

                factor[(i * count) + j] = i == j ? Math.Sqrt(sum) : sum / factor[(j * count) + j];
            }
        }

        return (factor, scale);
    }

    private void Substitute(double[] factor, double[] x)
    {
        for (int i = 0; i < count; i++)
        {
            for (int k = 0; k < i; k++)
            {
                x[i] -= factor[(i * count) + k] * x[k];
            }

            x[i] /= factor[(i * count) + i];
        }

        for (int i = count - 1; i >= 0; i--)
        {
            for (int k = i + 1; k < count; k++)
            {
                x[i] -= factor[(k * count) + i] * x[k];
            }

            x[i] /= factor[(i * count) + i];
        }
    }
}
