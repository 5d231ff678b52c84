using System.Collections.Immutable;
using System.Numerics;
using MathNet.Numerics.IntegralTransforms;
using Qc.Engine.Reading;

namespace Qc.Engine.Processing;

/// <summary>A complex spectrum from an FID, from high to low ppm, not yet phased.</summary>
/// <param name="Points">Complex points.</param>
/// <param name="FirstPpm">Shift of point 0.</param>
/// <param name="PpmPerPoint">Step, negative.</param>
/// <param name="GroupDelayPoints">Delay that was removed.</param>
/// <param name="DelayDerived">Whether it was derived from the data.</param>
/// <param name="BroadeningHertz">Exponential broadening applied to an FID that was cut short, else 0.</param>
internal sealed record ComplexSpectrum(
    Complex[] Points, double FirstPpm, double PpmPerPoint, double GroupDelayPoints, bool DelayDerived, double BroadeningHertz);

/// <summary>
/// From FID to complex spectrum. Convention: S_k = Σ s_n exp(−2πikn/N), so a line of positive frequency ν (higher shift than
/// the transmitter) stands at k = ν·N·dwell; the spectrum is then put from high to low ppm. The delay G of a digital filter
/// is removed by rotating the FID left by ⌊G⌋ and multiplying S_k by exp(+2πi(G−⌊G⌋)k/N), k counted from the centre, so that
/// nothing is thrown away. An FID that was cut short while its signal still stood is damped until it ends at a fiftieth of its
/// start, lest the cut leave ripples that look like lines. Without such a delay the first point is halved: the transform is one-sided.
/// </summary>
internal static class FidTransform
{
    private const int LongestDelayPoints = 200;
    private const double LargestEnd = 0.02;

    /// <summary>Shift given to the transmitter where the header does not tell it: that of water, where many methods put it.</summary>
    public const double NominalCentrePpm = 4.7;

    public static ComplexSpectrum Transform(FidMeasurement fid)
    {
        int count = fid.Real.Length;
        (double delay, bool derived) = fid.GroupDelayPoints is { } stated ? (stated, false) : (DeriveDelay(fid), true);
        int whole = (int)Math.Floor(delay);
        double broadening = Broadening(fid, whole);
        int length = (int)BitOperations.RoundUpToPowerOf2((uint)Math.Max(2 * count, 16384));
        var work = new Complex[length];
        for (int n = 0; n < count; n++)
        {
            // The build-up before time zero goes to the end of the padded FID: negative times.
            int target = n >= whole ? n - whole : length - whole + n;
            double damping = Math.Exp(-Math.PI * broadening * Math.Max(0, n - delay) * fid.DwellSeconds);
            work[target] = damping * new Complex(fid.Real[n], fid.Imaginary[n]);
        }

        // What a filter passes is at half of its plateau at time zero by itself.
        work[0] *= delay > 0 ? 1 : 0.5;
        Fourier.Forward(work, FourierOptions.Matlab);
        double fraction = delay - whole;
        var ordered = new Complex[length];
        for (int i = 0; i < length; i++)
        {
            // i = 0 is the highest frequency: k runs from N/2 − 1 down to −N/2.
            int k = (length / 2) - 1 - i;
            Complex phase = Complex.FromPolarCoordinates(1, 2 * Math.PI * fraction * k / length);
            ordered[i] = work[(k + length) % length] * phase;
        }

        double zeroPpmMHz = fid.Facts.ZeroPpmFrequencyMHz ?? fid.Facts.ObserveFrequencyMHz;
        double step = 1 / (length * fid.DwellSeconds * zeroPpmMHz);
        double centre = fid.CentrePpm ?? NominalCentrePpm;
        return new ComplexSpectrum(ordered, centre + (((length / 2) - 1) * step), -step, delay, derived, broadening);
    }

    /// <summary>Broadening in Hz that brings what signal there is at the end of the FID to a fiftieth of that at its start.</summary>
    private static double Broadening(FidMeasurement fid, int whole)
    {
        int count = fid.Real.Length;
        int stretch = count / 16;
        if (stretch < 64 || whole + (2 * stretch) > count)
        {
            return 0;
        }

        double end = SignalPower(fid, count - stretch, stretch);
        double start = SignalPower(fid, whole, stretch);
        double ratio = start > 0 ? Math.Sqrt(end / start) : 0;
        return ratio > LargestEnd ? Math.Log(ratio / LargestEnd) / (Math.PI * (count - whole) * fid.DwellSeconds) : 0;
    }

    /// <summary>
    /// Mean power of a stretch less that of its noise, which is what most bins of its transform hold: the median of the power of
    /// complex normal noise is ln 2 times its mean.
    /// </summary>
    private static double SignalPower(FidMeasurement fid, int first, int count)
    {
        Complex[] work = [.. Enumerable.Range(first, count).Select(n => new Complex(fid.Real[n], fid.Imaginary[n]))];
        double power = work.Sum(c => (c.Real * c.Real) + (c.Imaginary * c.Imaginary)) / count;
        Fourier.Forward(work, FourierOptions.Matlab);
        double[] bins = [.. work.Select(c => (c.Real * c.Real) + (c.Imaginary * c.Imaginary)).Order()];
        return Math.Max(0, power - (bins[count / 2] / (Math.Log(2) * count)));
    }

    /// <summary>
    /// Delay of a filter whose impulse response is symmetric: its step response passes half of the plateau at the delay.
    /// An FID that starts at full height has none.
    /// </summary>
    private static double DeriveDelay(FidMeasurement fid)
    {
        int reach = Math.Min(LongestDelayPoints, fid.Real.Length / 4);
        var magnitude = new double[reach];
        for (int n = 0; n < reach; n++)
        {
            magnitude[n] = Math.Sqrt((fid.Real[n] * fid.Real[n]) + (fid.Imaginary[n] * fid.Imaginary[n]));
        }

        double plateau = magnitude.Max();
        int crossing = Array.FindIndex(magnitude, m => m > 0.5 * plateau);
        if (crossing < 3)
        {
            return 0;
        }

        double before = magnitude[crossing - 1];
        return crossing - 1 + (((0.5 * plateau) - before) / (magnitude[crossing] - before));
    }
}
