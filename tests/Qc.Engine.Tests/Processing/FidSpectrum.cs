using System.Numerics;
using MathNet.Numerics.IntegralTransforms;

namespace Qc.Engine.Tests.Processing;

/// <summary>Spectrum of an FID of nothing but noise.</summary>
internal sealed record FidSpectrum(double[] Real)
{
    public static FidSpectrum OfNoise(int points, int length, double deviation, int seed)
    {
        var random = new Gaussian(seed);
        var work = new Complex[length];
        for (int n = 0; n < points; n++)
        {
            work[n] = new Complex(deviation * random.Next(), deviation * random.Next());
        }

        Fourier.Forward(work, FourierOptions.Matlab);
        return new FidSpectrum([.. work.Select(c => c.Real)]);
    }
}
