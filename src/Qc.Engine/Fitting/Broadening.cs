using System.Numerics;
using MathNet.Numerics.IntegralTransforms;
using Qc.Engine.Processing;

namespace Qc.Engine.Fitting;

/// <summary>
/// Convolution of a spectrum with a Lorentzian of width b (Hz) and unit area, by multiplication with exp(−πb|t|) in the
/// time domain. A coarse fit sees multiplets as smooth humps and cannot fall into the gaps between their lines.
/// </summary>
internal static class Broadening
{
    /// <summary>The broadened intensities; the spectrum's own array where b is zero.</summary>
    public static double[] Apply(Spectrum spectrum, double broadeningHertz)
    {
        if (broadeningHertz <= 0)
        {
            return spectrum.Intensity;
        }

        int length = (int)BitOperations.RoundUpToPowerOf2((uint)(spectrum.Count + Math.Min(spectrum.Count, 8192)));
        var work = new Complex[length];
        for (int i = 0; i < spectrum.Count; i++)
        {
            work[i] = spectrum.Intensity[i];
        }

        Fourier.Forward(work, FourierOptions.Matlab);
        double step = Math.PI * broadeningHertz / (length * spectrum.HzPerPoint);
        for (int k = 0; k < length; k++)
        {
            work[k] *= Math.Exp(-step * Math.Min(k, length - k));
        }

        Fourier.Inverse(work, FourierOptions.Matlab);
        var result = new double[spectrum.Count];
        for (int i = 0; i < result.Length; i++)
        {
            result[i] = work[i].Real;
        }

        return result;
    }

    /// <summary>Standard deviation of the noise after broadening: ∫L² = 1/(πb).</summary>
    public static double Noise(Spectrum spectrum, double broadeningHertz)
    {
        double correlated = spectrum.NoiseCorrelationPoints * spectrum.HzPerPoint;
        double factor = broadeningHertz <= 0 ? 1 : Math.Min(1, Math.Sqrt(correlated / (Math.PI * broadeningHertz)));
        return spectrum.NoiseStandardDeviation * factor;
    }
}
