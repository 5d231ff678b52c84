using System.Numerics;
using MathNet.Numerics.IntegralTransforms;
using Qc.Engine.Processing;

namespace Qc.Engine.Verdicts.Rules;

/// <summary>
/// suitability.phase: the phase error left in the spectrum. With a phase error φ the measured lines are A cos φ + D sin φ, A
/// absorption and D dispersion, so φ is found by regression of the residual on the Hilbert transform of the model.
/// </summary>
internal static class PhaseRule
{
    public const string Id = "suitability.phase";

    public static IEnumerable<Finding> Judge(JudgedSpectrum judged)
    {
        double[] dispersion = Dispersion([.. judged.Fit.Modelled.Zip(judged.Fit.Baseline, (m, b) => m - b)]);
        Spectrum spectrum = judged.Spectrum;
        double product = 0;
        double square = 0;
        for (int i = 0; i < dispersion.Length; i++)
        {
            product += (spectrum.Intensity[i] - judged.Fit.Modelled[i]) * dispersion[i];
            square += dispersion[i] * dispersion[i];
        }

        if (square <= 0)
        {
            yield break;
        }

        double degrees = Math.Atan(product / square) * 180 / Math.PI;
        double limit = judged.Criteria.Suitability.PhaseDegrees;
        bool passes = Math.Abs(degrees) <= limit;
        yield return new Finding(
            Id,
            judged.Name,
            $"The phase error left is {Say.Tenth(degrees)} degrees; at most {Say.Tenth(limit)} is allowed" + (passes ? "." : ": phase the spectrum again."),
            passes ? Outcome.Pass : Outcome.Flag,
            degrees,
            null,
            -limit,
            limit,
            "degrees");
    }

    private static double[] Dispersion(double[] absorption)
    {
        int length = (int)BitOperations.RoundUpToPowerOf2((uint)(2 * absorption.Length));
        var work = new Complex[length];
        for (int i = 0; i < absorption.Length; i++)
        {
            work[i] = absorption[i];
        }

        Fourier.Forward(work, FourierOptions.Matlab);
        for (int k = 0; k < length; k++)
        {
            work[k] *= k == 0 || k == length / 2 ? Complex.Zero : k < length / 2 ? -Complex.ImaginaryOne : Complex.ImaginaryOne;
        }

        Fourier.Inverse(work, FourierOptions.Matlab);
        return [.. work.Take(absorption.Length).Select(c => c.Real)];
    }
}
