using MathNet.Numerics.LinearAlgebra;
using MathNet.Numerics.LinearAlgebra.Double;

namespace Qc.Engine.Spins;

/// <summary>Eigenvalues and eigenvectors of a real symmetric matrix.</summary>
internal static class SymmetricEigen
{
    /// <summary>Solves H v = E v; eigenvalues ascend, eigenvector i is <c>vectors[i * n …]</c>.</summary>
    public static (double[] Values, double[] Vectors) Solve(double[] matrix, int n)
    {
        if (n == 1)
        {
            return ([matrix[0]], [1.0]);
        }

        var evd = new DenseMatrix(n, n, matrix).Evd(Symmetricity.Symmetric);
        var values = new double[n];
        for (int i = 0; i < n; i++)
        {
            values[i] = evd.EigenValues[i].Real;
        }

        // Column-major storage: one eigenvector after the other.
        return (values, ((DenseMatrix)evd.EigenVectors).Values);
    }
}
