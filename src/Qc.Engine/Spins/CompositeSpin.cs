namespace Qc.Engine.Spins;

/// <summary>
/// n equivalent spins-½ seen as one particle. Their coupling among themselves does not show, so the n spins fall into
/// independent particles of total spin F = n/2, n/2−1, …, each occurring C(n, n/2−F) − C(n, n/2−F−1) times
/// (H. M. McConnell, A. D. McLean, C. A. Reilly, J. Chem. Phys. 1955, 23, 1152; from memory).
/// </summary>
/// <param name="TwiceF">2F, so that it is a whole number.</param>
/// <param name="Multiplicity">How often this total spin occurs.</param>
internal readonly record struct CompositeSpin(int TwiceF, double Multiplicity)
{
    /// <summary>All particles of <paramref name="count"/> equivalent spins-½, largest F first.</summary>
    public static CompositeSpin[] Of(int count)
    {
        var particles = new CompositeSpin[count / 2 + 1];
        for (int k = 0; k < particles.Length; k++)
        {
            particles[k] = new CompositeSpin(count - 2 * k, Binomial(count, k) - Binomial(count, k - 1));
        }

        return particles;
    }

    /// <summary>C(n, k); 0 outside 0 … n.</summary>
    public static double Binomial(int n, int k)
    {
        if (k < 0 || k > n)
        {
            return 0;
        }

        double value = 1;
        for (int i = 1; i <= k; i++)
        {
            value = value * (n - k + i) / i;
        }

        return value;
    }
}
