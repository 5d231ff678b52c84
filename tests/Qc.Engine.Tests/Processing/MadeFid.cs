using System.Numerics;
using Qc.Engine.Reading;

namespace Qc.Engine.Tests.Processing;

/// <summary>A decaying line: s(t) = amplitude · exp(2πi·hertz·t − π·width·t), width its full width at half height.</summary>
internal readonly record struct Decay(double Hertz, double Amplitude, double WidthHertz);

/// <summary>FIDs written down from their formula, so that position, area and phase of every line are known exactly.</summary>
internal static class MadeFid
{
    public const double FrequencyMHz = 400;
    public const double SweepHertz = 4800;
    public const double CentrePpm = 4.5;

    public static double Ppm(double hertz) => CentrePpm + (hertz / FrequencyMHz);

    public static FidMeasurement Of(
        IReadOnlyList<Decay> lines, int points = 8192, double noise = 0, int seed = 1, double phaseDegrees = 0, double? delay = 0)
    {
        Complex turn = Complex.FromPolarCoordinates(1, phaseDegrees * Math.PI / 180);
        var random = new Gaussian(seed);
        var values = new Complex[points];
        for (int n = 0; n < points; n++)
        {
            values[n] = (turn * At(lines, n / SweepHertz)) + new Complex(noise * random.Next(), noise * random.Next());
        }

        return Measurement(values, delay);
    }

    /// <summary>
    /// The same as an oversampling receiver records it: sampled 50 times faster, passed through a symmetric low-pass filter
    /// of 2·3399 + 1 taps (a sinc under a Blackman window), every 50th value kept. Such a filter delays by half its length:
    /// 3399/50 = 67.98 points of the result.
    /// </summary>
    public static FidMeasurement Filtered(IReadOnlyList<Decay> lines, double? stated, int points = 4096, double phaseDegrees = 0)
    {
        const int Factor = 50;
        const int Half = 3399;
        var taps = new double[(2 * Half) + 1];
        for (int j = -Half; j <= Half; j++)
        {
            double x = 0.92 * j / Factor;
            double sinc = j == 0 ? 1 : Math.Sin(Math.PI * x) / (Math.PI * x);
            double u = Math.PI * j / (Half + 1);
            taps[j + Half] = 0.92 / Factor * sinc * (0.42 + (0.5 * Math.Cos(u)) + (0.08 * Math.Cos(2 * u)));
        }

        Complex turn = Complex.FromPolarCoordinates(1, phaseDegrees * Math.PI / 180);
        var fine = new Complex[points * Factor];
        for (int m = 0; m < fine.Length; m++)
        {
            fine[m] = turn * At(lines, m / (SweepHertz * Factor)) * (m == 0 ? 0.5 : 1);
        }

        var values = new Complex[points];
        for (int n = 0; n < points; n++)
        {
            int last = n * Factor;
            for (int j = 0; j < taps.Length && j <= last; j++)
            {
                values[n] += taps[j] * fine[last - j];
            }
        }

        return Measurement(values, stated);
    }

    private static Complex At(IReadOnlyList<Decay> lines, double seconds)
    {
        Complex sum = Complex.Zero;
        foreach (Decay line in lines)
        {
            sum += line.Amplitude * Complex.Exp(new Complex(-Math.PI * line.WidthHertz * seconds, 2 * Math.PI * line.Hertz * seconds));
        }

        return sum;
    }

    private static FidMeasurement Measurement(Complex[] values, double? delay) => new(
        new AcquisitionFacts { Nucleus = "1H", ObserveFrequencyMHz = FrequencyMHz, ZeroPpmFrequencyMHz = FrequencyMHz },
        [],
        [.. values.Select(v => v.Real)],
        [.. values.Select(v => v.Imaginary)],
        1 / SweepHertz,
        CentrePpm,
        delay);
}
