namespace Qc.Engine.Spins;

/// <summary>
/// Eigenvalues and eigenvectors of a symmetric tridiagonal matrix T with diagonal d and off-diagonal e
/// (e_k couples k−1 and k). T falls apart where e_k is zero to rounding. Small parts are solved by implicit QL with its
/// rotations (A. Dubrulle, R. S. Martin, J. H. Wilkinson, Numer. Math. 1968, 12, 377); of larger parts QL gives the
/// eigenvalues and <see cref="InverseIteration"/> the eigenvectors, at a cost of n² instead of n³. (Papers from memory.)
/// </summary>
internal static class TridiagonalEigen
{
    private const double Epsilon = 2.220446049250313e-16;

    /// <summary>Up to this order rotating all vectors is as fast.</summary>
    private const int Small = 32;

    /// <summary>Most QL steps for one eigenvalue; two are usual.</summary>
    private const int MostSteps = 60;

    /// <summary>Solves T z = λ z.</summary>
    /// <param name="diagonal">d; becomes the eigenvalues in ascending order.</param>
    /// <param name="below">e, its first element unused.</param>
    /// <returns>Eigenvector i is <c>[i * n …]</c>.</returns>
    public static double[] Solve(double[] diagonal, double[] below)
    {
        int n = diagonal.Length;
        double norm = 0;
        for (int i = 0; i < n; i++)
        {
            norm = Math.Max(norm, Math.Abs(diagonal[i]) + Math.Abs(below[i]) + (i + 1 < n ? Math.Abs(below[i + 1]) : 0));
        }

        var vectors = new double[n * n];
        for (int start = 0; start < n;)
        {
            int end = start + 1;
            while (end < n && Math.Abs(below[end]) > Epsilon * norm)
            {
                end++;
            }

            SolvePart(diagonal.AsSpan(start, end - start), below.AsSpan(start, end - start), norm, vectors, start, n);
            start = end;
        }

        return Sort(diagonal, vectors);
    }

    private static void SolvePart(Span<double> d, ReadOnlySpan<double> e, double norm, double[] vectors, int start, int n)
    {
        int size = d.Length;
        double[] values = d.ToArray();
        if (size > Small)
        {
            Ql(values, [.. e[1..], 0], norm, null, 0, 0);
            Array.Sort(values);
            if (InverseIteration.TryVectors(d, e[1..], values, norm, vectors.AsSpan(start * n + start), n))
            {
                values.CopyTo(d);
                return;
            }

            d.CopyTo(values);
        }

        for (int i = 0; i < size; i++)
        {
            vectors.AsSpan((start + i) * n + start, size).Clear();
            vectors[(start + i) * n + start + i] = 1;
        }

        Ql(values, [.. e[1..], 0], norm, vectors, start, n);
        values.CopyTo(d);
    }

    /// <summary>Implicit QL; here e_k couples k and k+1. With vectors, their rows start… are rotated along.</summary>
    private static void Ql(double[] d, double[] e, double norm, double[]? vectors, int start, int n)
    {
        int size = d.Length;
        for (int l = 0; l < size; l++)
        {
            for (int step = 0; ; step++)
            {
                int m = l;
                while (m + 1 < size && Math.Abs(e[m]) > Epsilon * Math.Max(Math.Abs(d[m]) + Math.Abs(d[m + 1]), 1e-3 * norm))
                {
                    m++;
                }

                if (m == l)
                {
                    break;
                }

                if (step == MostSteps)
                {
                    throw new ArithmeticException("An eigenvalue of a spin system did not settle.");
                }

                double g = (d[l + 1] - d[l]) / (2 * e[l]);
                double r = Math.Sqrt(g * g + 1);
                g = d[m] - d[l] + e[l] / (g >= 0 ? g + r : g - r);
                double s = 1;
                double c = 1;
                double p = 0;
                int i = m - 1;
                for (; i >= l; i--)
                {
                    double f = s * e[i];
                    double b = c * e[i];
                    r = Math.Sqrt(f * f + g * g);
                    e[i + 1] = r;
                    if (r == 0)
                    {
                        d[i + 1] -= p;
                        e[m] = 0;
                        break;
                    }

                    s = f / r;
                    c = g / r;
                    g = d[i + 1] - p;
                    r = (d[i] - g) * s + 2 * c * b;
                    p = s * r;
                    d[i + 1] = g + p;
                    g = c * r - b;
                    if (vectors is not null)
                    {
                        VectorMath.Rotate(
                            vectors.AsSpan((start + i) * n + start, size),
                            vectors.AsSpan((start + i + 1) * n + start, size), c, s);
                    }
                }

                if (i < l)
                {
                    d[l] -= p;
                    e[l] = g;
                    e[m] = 0;
                }
            }
        }
    }

    private static double[] Sort(double[] values, double[] vectors)
    {
        int n = values.Length;
        var order = new int[n];
        bool ascending = true;
        for (int i = 0; i < n; i++)
        {
            order[i] = i;
            ascending &= i == 0 || values[i - 1] <= values[i];
        }

        if (ascending)
        {
            return vectors;
        }

        Array.Sort(values, order);
        var sorted = new double[n * n];
        for (int i = 0; i < n; i++)
        {
            vectors.AsSpan(order[i] * n, n).CopyTo(sorted.AsSpan(i * n, n));
        }

        return sorted;
    }
}
