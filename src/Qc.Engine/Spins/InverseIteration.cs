namespace Qc.Engine.Spins;

/// <summary>
/// Eigenvectors of a tridiagonal matrix T with no zero off-diagonal, from its eigenvalues: (T − λ) x_new = x grows along
/// the wanted vector. Vectors of close eigenvalues are made orthogonal in each round
/// (G. Peters, J. H. Wilkinson, in Handbook for Automatic Computation II, 1971; from memory).
/// </summary>
internal static class InverseIteration
{
    private const double Epsilon = 2.220446049250313e-16;

    /// <summary>Eigenvalues closer than this share of the norm are kept orthogonal: elsewhere rounding costs 1e−16/1e−5.</summary>
    private const double Close = 1e-5;

    /// <summary>A vector is accepted with a residual |T x − λ x| below this share of the norm.</summary>
    private const double Residual = 1e-13;

    private const int MostRounds = 6;

    /// <summary>Fills in the vectors, or says that some vector did not settle.</summary>
    /// <param name="d">Diagonal.</param>
    /// <param name="e">Off-diagonal; e_k couples k and k+1.</param>
    /// <param name="values">Eigenvalues, ascending.</param>
    /// <param name="norm">Norm of the whole matrix.</param>
    /// <param name="vectors">Vector i goes to <c>[i * stride …]</c>.</param>
    /// <param name="stride">Distance from one vector to the next.</param>
    public static bool TryVectors(
        ReadOnlySpan<double> d, ReadOnlySpan<double> e, double[] values, double norm, Span<double> vectors, int stride)
    {
        int n = d.Length;
        var lu = new Factors(n);
        uint seed = 1;
        int firstClose = 0;
        double shift = double.NegativeInfinity;
        for (int j = 0; j < n; j++)
        {
            if (j > 0 && values[j] - values[j - 1] > Close * norm)
            {
                firstClose = j;
            }

            // Equal eigenvalues would give equal vectors; a few roundings apart they do not.
            shift = Math.Max(values[j], shift + 10 * Epsilon * norm);
            lu.Factor(d, e, shift, norm);
            Span<double> x = vectors.Slice(j * stride, n);
            for (int k = 0; k < n; k++)
            {
                // A fixed sequence (linear congruence), so that no start is orthogonal to its vector by symmetry.
                seed = seed * 1664525 + 1013904223;
                x[k] = 0.5 + seed / 4294967296.0;
            }

            Scale(x, 1 / Math.Sqrt(VectorMath.Dot(x, x)));
            bool settled = false;
            for (int round = 0; round < MostRounds; round++)
            {
                lu.Solve(x);
                for (int k = firstClose; k < j; k++)
                {
                    ReadOnlySpan<double> other = vectors.Slice(k * stride, n);
                    VectorMath.AddScaled(x, -VectorMath.Dot(x, other), other);
                }

                double growth = Math.Sqrt(VectorMath.Dot(x, x));
                Scale(x, 1 / growth);
                if (settled)
                {
                    break;
                }

                settled = growth * Residual * norm >= 1;
            }

            if (!settled)
            {
                return false;
            }
        }

        return true;
    }

    private static void Scale(Span<double> x, double s)
    {
        for (int i = 0; i < x.Length; i++)
        {
            x[i] *= s;
        }
    }

    /// <summary>T − λ = L U by rows with exchange of neighbours; U has two superdiagonals.</summary>
    private sealed class Factors(int n)
    {
        private readonly double[] _inverse = new double[n];
        private readonly double[] _first = new double[n];
        private readonly double[] _second = new double[n];
        private readonly double[] _multiplier = new double[n];
        private readonly bool[] _exchanged = new bool[n];

        public void Factor(ReadOnlySpan<double> d, ReadOnlySpan<double> e, double shift, double norm)
        {
            double pivot = d[0] - shift;
            double right = e[0];
            for (int i = 0; i + 1 < n; i++)
            {
                double next = d[i + 1] - shift;
                double nextRight = i + 2 < n ? e[i + 1] : 0;
                _exchanged[i] = Math.Abs(pivot) < Math.Abs(e[i]);
                if (_exchanged[i])
                {
                    _inverse[i] = 1 / e[i];
                    _first[i] = next;
                    _second[i] = nextRight;
                    _multiplier[i] = pivot * _inverse[i];
                    pivot = right - _multiplier[i] * next;
                    right = -_multiplier[i] * nextRight;
                }
                else
                {
                    _inverse[i] = 1 / pivot;
                    _first[i] = right;
                    _second[i] = 0;
                    _multiplier[i] = e[i] * _inverse[i];
                    pivot = next - _multiplier[i] * right;
                    right = nextRight;
                }
            }

            // An exact eigenvalue makes the last pivot zero; one rounding of the norm serves as well.
            _inverse[n - 1] = 1 / (Math.Abs(pivot) < Epsilon * norm ? Epsilon * norm : pivot);
        }

        public void Solve(Span<double> x)
        {
            for (int i = 0; i + 1 < n; i++)
            {
                if (_exchanged[i])
                {
                    (x[i], x[i + 1]) = (x[i + 1], x[i] - _multiplier[i] * x[i + 1]);
                }
                else
                {
                    x[i + 1] -= _multiplier[i] * x[i];
                }
            }

            x[n - 1] *= _inverse[n - 1];
            x[n - 2] = (x[n - 2] - _first[n - 2] * x[n - 1]) * _inverse[n - 2];
            for (int i = n - 3; i >= 0; i--)
            {
                x[i] = (x[i] - _first[i] * x[i + 1] - _second[i] * x[i + 2]) * _inverse[i];
            }
        }
    }
}
