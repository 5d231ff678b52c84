namespace Qc.Engine.Spins;

/// <summary>Splitting by deuterium, spin 1, as in the residual protons of deuterated solvents.</summary>
public static class Deuterated
{
    /// <summary>
    /// Lines of a proton coupled to equivalent deuterons: 1:1:1 for one, 1:2:3:2:1 for two (CHD2), 1:3:6:7:6:3:1 for
    /// three; the coefficients of (1 + x + x²)ⁿ.
    /// </summary>
    /// <param name="deuterons">Number of equivalent deuterons, 0 to 32.</param>
    /// <param name="couplingHertz">J(HD).</param>
    /// <returns>Offsets from the centre by rising multiple of J; intensities sum to 1; the site is 0.</returns>
    public static Transition[] Pattern(int deuterons, double couplingHertz)
    {
        ArgumentOutOfRangeException.ThrowIfNegative(deuterons);
        ArgumentOutOfRangeException.ThrowIfGreaterThan(deuterons, 32);
        double[] shares = [1];
        for (int d = 0; d < deuterons; d++)
        {
            var next = new double[shares.Length + 2];
            for (int k = 0; k < shares.Length; k++)
            {
                next[k] += shares[k] / 3;
                next[k + 1] += shares[k] / 3;
                next[k + 2] += shares[k] / 3;
            }

            shares = next;
        }

        return [.. shares.Select((share, k) => new Transition((k - deuterons) * couplingHertz, share, 0))];
    }
}
