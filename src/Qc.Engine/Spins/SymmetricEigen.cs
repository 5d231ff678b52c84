namespace Qc.Engine.Spins;

/// <summary>
/// Eigenvalues and eigenvectors of a real symmetric matrix H: Householder reflections P = 1 − v vᵀ/h take H to a
/// tridiagonal T, whose eigenvectors the reflections take back.
/// (R. S. Martin, C. Reinsch, J. H. Wilkinson, Numer. Math. 1968, 11, 181; from memory.)
/// </summary>
/// <remarks>
/// Written here because blocks are many and mostly small, rows stay contiguous, and the order of every sum is fixed.
/// Elements are frequencies in Hz: their squares must neither overflow nor underflow (1e−140 to 1e+140).
/// </remarks>
internal static class SymmetricEigen
{
    /// <summary>Eigenvectors taken back together, so that they and the reflection at hand stay in the cache.</summary>
    private const int Tile = 16;

    /// <summary>Solves H v = E v; eigenvalues ascend, eigenvector i is <c>vectors[i * n …]</c>.</summary>
    /// <param name="matrix">H, row after row; destroyed.</param>
    /// <param name="n">Order.</param>
    public static (double[] Values, double[] Vectors) Solve(double[] matrix, int n)
    {
        var diagonal = new double[n];
        var below = new double[n];
        var norms = new double[n];
        Reduce(matrix, n, diagonal, below, norms);
        double[] vectors = TridiagonalEigen.Solve(diagonal, below);
        for (int start = 0; start < n; start += Tile)
        {
            for (int k = 1; k < n; k++)
            {
                ReadOnlySpan<double> v = matrix.AsSpan(k * n, k);
                for (int i = start; i < Math.Min(start + Tile, n) && norms[k] > 0; i++)
                {
                    Span<double> vector = vectors.AsSpan(i * n, k);
                    VectorMath.AddScaled(vector, -VectorMath.Dot(v, vector) / norms[k], v);
                }
            }
        }

        return (diagonal, vectors);
    }

    /// <summary>
    /// Reduces the rows from the last up. Row k keeps its reflection v (length k) and norms[k] its h = vᵀv/2, or 0 if
    /// nothing had to be done. The update H −= v wᵀ + w vᵀ is applied to each row together with the product of that row with the next v.
    /// </summary>
    private static void Reduce(double[] a, int n, double[] diagonal, double[] below, double[] norms)
    {
        var w = new double[n];
        var product = new double[n];
        var none = new double[n];
        ReadOnlySpan<double> lastV = none;
        double largest = 0;
        foreach (double element in a)
        {
            largest = Math.Max(largest, Math.Abs(element));
        }

        // Elements this small are four digits below the rounding of H.
        double nothing = 1e-40 * largest * largest;
        for (int k = n - 1; k >= 1; k--)
        {
            // Row k still lacks the update of the step before; its diagonal element is final after it.
            Span<double> row = a.AsSpan(k * n, k);
            double vk = lastV[k];
            double wk = w[k];
            for (int i = 0; i < k; i++)
            {
                row[i] -= vk * w[i] + wk * lastV[i];
            }

            diagonal[k] = a[k * n + k] - 2 * vk * wk;
            double tail = k > 1 ? VectorMath.Dot(row[..(k - 1)], row[..(k - 1)]) : 0;
            double last = row[k - 1];
            if (tail <= nothing)
            {
                below[k] = last;
                norms[k] = 0;
                // No reflection: bring the remaining rows up to date and go on without a pending update.
                for (int r = 0; r < k; r++)
                {
                    Span<double> pending = a.AsSpan(r * n, r + 1);
                    for (int i = 0; i <= r; i++)
                    {
                        pending[i] -= lastV[r] * w[i] + w[r] * lastV[i];
                    }
                }

                lastV = none;
                Array.Clear(w);
                continue;
            }

            double length = Math.Sqrt(tail + last * last);
            double g = last >= 0 ? -length : length;
            double h = tail + last * last - last * g;
            below[k] = g;
            norms[k] = h;
            row[k - 1] = last - g;

            Array.Clear(product);
            for (int r = 0; r < k; r++)
            {
                double dot = VectorMath.UpdateAndApply(
                    a.AsSpan(r * n, r), lastV[r], w, w[r], lastV, product, row[r], row);
                a[r * n + r] -= 2 * lastV[r] * w[r];
                product[r] += dot + a[r * n + r] * row[r];
            }

            // w = p − v (vᵀp)/(2h) with p = H v / h.
            double vp = 0;
            for (int i = 0; i < k; i++)
            {
                product[i] /= h;
                vp += row[i] * product[i];
            }

            for (int i = 0; i < k; i++)
            {
                w[i] = product[i] - vp / (2 * h) * row[i];
            }

            lastV = row;
        }

        diagonal[0] = a[0] - 2 * lastV[0] * w[0];
    }
}
