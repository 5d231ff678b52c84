using Qc.Engine.Processing;

namespace Qc.Engine.Fitting;

/// <summary>
/// The smooth part of what a model leaves over: baseline, feet of lines beyond the model's shape, humps far wider than a
/// multiplet. It is the lower quartile of the residual in a wide moving window, so a multiplet that nothing draws, which
/// fills less than half of the window, stays out of it.
/// Notation: window W = 160 Hz, one value every W/8, quartile raised by 0.674 σ of the noise (the lower quartile of a
/// normal distribution lies 0.674 σ under its mean), then joined by straight lines.
/// </summary>
internal static class ResidualBaseline
{
    private const double WindowHertz = 160;
    private const int KnotsPerWindow = 8;
    private const double DrawnInSigmas = 10;
    private const double QuartileInSigmas = 0.6744897501960817;

    /// <summary>
    /// The baseline at every point of the spectrum. Where the model draws much, its shape faults hide the baseline; there it
    /// is bridged.
    /// </summary>
    public static double[] Of(Spectrum spectrum, double[] modelled)
    {
        double drawn = DrawnInSigmas * spectrum.NoiseStandardDeviation;
        int half = Math.Max(8, (int)(0.5 * WindowHertz / spectrum.HzPerPoint));
        int spacing = Math.Max(1, 2 * half / KnotsPerWindow);
        var knots = new List<(int Index, double Value)>();
        var window = new List<double>(2 * half);
        for (int centre = 0; centre < modelled.Length + spacing; centre += spacing)
        {
            int at = Math.Min(centre, modelled.Length - 1);
            window.Clear();
            for (int i = Math.Max(0, at - half); i <= Math.Min(modelled.Length - 1, at + half); i++)
            {
                if (modelled[i] < drawn)
                {
                    window.Add(spectrum.Intensity[i] - modelled[i]);
                }
            }

            if (window.Count >= half / 2)
            {
                window.Sort();
                knots.Add((at, window[window.Count / 4] + (QuartileInSigmas * spectrum.NoiseStandardDeviation)));
            }
        }

        return Joined(knots, modelled.Length);
    }

    private static double[] Joined(List<(int Index, double Value)> knots, int length)
    {
        var baseline = new double[length];
        if (knots.Count == 0)
        {
            return baseline;
        }

        int k = 0;
        for (int i = 0; i < length; i++)
        {
            while (k < knots.Count - 2 && knots[k + 1].Index <= i)
            {
                k++;
            }

            (int left, double a) = knots[k];
            (int right, double b) = knots[Math.Min(k + 1, knots.Count - 1)];
            double share = right > left ? Math.Clamp((double)(i - left) / (right - left), 0, 1) : 0;
            baseline[i] = a + (share * (b - a));
        }

        return baseline;
    }
}
