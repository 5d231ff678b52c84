using MathNet.Numerics.LinearAlgebra;
using MathNet.Numerics.LinearAlgebra.Double;
using Qc.Engine.Spins;

namespace Qc.Engine.Tests.Spins;

/// <summary>
/// The slow, obvious way: every spin on its own, the Hamiltonian of all 2^n product states as one dense matrix.
/// Bit k of a state is 1 when spin k points down.
/// </summary>
internal static class DenseTwin
{
    public static List<(double Frequency, double Intensity)> Lines(SpinSystem system)
    {
        int[] siteOf = [.. system.Sites.SelectMany((site, i) => Enumerable.Repeat(i, site.Count))];
        int n = siteOf.Length;
        int states = 1 << n;
        Matrix<double> h = DenseMatrix.Create(states, states, 0);
        Matrix<double> lowering = DenseMatrix.Create(states, states, 0);
        for (int state = 0; state < states; state++)
        {
            for (int a = 0; a < n; a++)
            {
                h[state, state] += system.Sites[siteOf[a]].FrequencyHertz * M(state, a);
                if (M(state, a) > 0)
                {
                    lowering[state | (1 << a), state] = 1;
                }

                for (int b = a + 1; b < n; b++)
                {
                    double j = Coupling(system, siteOf[a], siteOf[b]);
                    h[state, state] += j * M(state, a) * M(state, b);
                    if (M(state, a) != M(state, b))
                    {
                        h[state ^ (1 << a) ^ (1 << b), state] += 0.5 * j;
                    }
                }
            }
        }

        var evd = h.Evd(Symmetricity.Symmetric);
        Matrix<double> amplitudes = evd.EigenVectors.Transpose() * lowering * evd.EigenVectors;
        double scale = Math.Pow(2, 1 - n);
        var lines = new List<(double, double)>();
        for (int i = 0; i < states; i++)
        {
            for (int f = 0; f < states; f++)
            {
                double intensity = scale * amplitudes[f, i] * amplitudes[f, i];
                if (intensity > 1e-12)
                {
                    lines.Add((evd.EigenValues[i].Real - evd.EigenValues[f].Real, intensity));
                }
            }
        }

        return lines;
    }

    private static double M(int state, int spin) => (state >> spin & 1) == 0 ? 0.5 : -0.5;

    private static double Coupling(SpinSystem system, int siteA, int siteB) =>
        system.Couplings.Where(c => (c.SiteA, c.SiteB) == (siteA, siteB) || (c.SiteB, c.SiteA) == (siteA, siteB)).Sum(c => c.Hertz);
}
