using Qc.Engine.Spins;
using Xunit;

namespace Qc.Engine.Tests.Spins;

public class SymmetricEigenTests
{
    public static TheoryData<string, int> Matrices => new()
    {
        { "random", 1 }, { "random", 2 }, { "random", 31 }, { "random", 70 }, { "random", 150 },
        { "zero", 40 }, { "equal", 40 }, { "twins", 80 }, { "close pairs", 101 }, { "tiny", 60 }, { "rank one", 50 },
        { "chain", 120 },
    };

    [Theory]
    [MemberData(nameof(Matrices))]
    public void Vectors_are_orthonormal_and_solve_the_matrix(string kind, int n)
    {
        double[] matrix = Matrix(kind, n);
        (double[] values, double[] vectors) = SymmetricEigen.Solve([.. matrix], n);

        double scale = Math.Max(1e-300, matrix.Max(Math.Abs)) * n;
        for (int i = 0; i < n; i++)
        {
            Assert.True(i == 0 || values[i] >= values[i - 1]);
            for (int row = 0; row < n; row++)
            {
                double product = 0;
                for (int k = 0; k < n; k++)
                {
                    product += matrix[row * n + k] * vectors[i * n + k];
                }

                Assert.Equal(0, (product - values[i] * vectors[i * n + row]) / scale, 1e-12);
            }

            for (int j = 0; j <= i; j++)
            {
                double overlap = 0;
                for (int k = 0; k < n; k++)
                {
                    overlap += vectors[i * n + k] * vectors[j * n + k];
                }

                Assert.Equal(i == j ? 1 : 0, overlap, 1e-9);
            }
        }
    }

    private static double[] Matrix(string kind, int n)
    {
        var random = new Random(n);
        var a = new double[n * n];
        for (int i = 0; i < n; i++)
        {
            for (int j = 0; j <= i; j++)
            {
                a[i * n + j] = a[j * n + i] = kind switch
                {
                    "zero" => 0,
                    "equal" => i == j ? 3 : 0,
                    // Two copies of one random matrix side by side: every eigenvalue twice.
                    "twins" => i < n / 2 || j >= n / 2 ? new Random(i % (n / 2) * n + j % (n / 2)).NextDouble() : 0,
                    // Wilkinson's matrix: pairs of eigenvalues equal to rounding, though no off-diagonal is small.
                    "close pairs" => i == j ? Math.Abs(i - n / 2) : i == j + 1 ? 1 : 0,
                    "tiny" => 1e-100 * random.NextDouble(),
                    "rank one" => 1,
                    "chain" => i == j ? 2 : i == j + 1 ? -1 : 0,
                    _ => random.NextDouble() - 0.5,
                };
            }
        }

        return a;
    }
}
