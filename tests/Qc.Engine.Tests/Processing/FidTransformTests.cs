using System.Numerics;
using Qc.Engine.Processing;
using Qc.Engine.Reading;
using Xunit;

namespace Qc.Engine.Tests.Processing;

/// <summary>Truth: the transform's own definition summed term by term, the formula that the FIDs are written from, and the same FID without a filter.</summary>
public class FidTransformTests
{
    [Fact]
    public void AgreesWithTheDefinitionSummedTermByTerm()
    {
        FidMeasurement fid = MadeFid.Of([new(700, 1, 3), new(-1300, 0.4, 8)], points: 1000, noise: 0.01);
        Complex[] fast = FidTransform.Transform(fid).Points;
        int length = fast.Length;
        foreach (int i in new[] { 0, 1, 777, length / 2, length - 2500, length - 1 })
        {
            int k = (length / 2) - 1 - i;
            Complex slow = Complex.Zero;
            for (int n = 0; n < fid.Real.Length; n++)
            {
                var value = new Complex(fid.Real[n], fid.Imaginary[n]);
                slow += (n == 0 ? 0.5 : 1) * value * Complex.Exp(new Complex(0, -2 * Math.PI * k * (double)n / length));
            }

            Assert.True((fast[i] - slow).Magnitude < 1e-9 * slow.Magnitude, $"point {i}: {fast[i]} is not {slow}");
        }
    }

    [Fact]
    public void KeepsTheEnergy()
    {
        FidMeasurement fid = MadeFid.Of([new(700, 1, 3)], points: 5000, noise: 0.1);
        Complex[] spectrum = FidTransform.Transform(fid).Points;
        double time = -0.75 * ((fid.Real[0] * fid.Real[0]) + (fid.Imaginary[0] * fid.Imaginary[0]));
        for (int n = 0; n < fid.Real.Length; n++)
        {
            time += (fid.Real[n] * fid.Real[n]) + (fid.Imaginary[n] * fid.Imaginary[n]);
        }

        double frequency = spectrum.Sum(c => (c.Real * c.Real) + (c.Imaginary * c.Imaginary)) / spectrum.Length;
        Assert.Equal(1, frequency / time, 1e-11);
    }

    [Theory]
    [InlineData(1234.5)]
    [InlineData(-2003.25)]
    public void PutsALineOfPositiveFrequencyAboveTheTransmitterAtItsExactPlace(double hertz)
    {
        ComplexSpectrum spectrum = FidTransform.Transform(MadeFid.Of([new(hertz, 1, 4)], points: 16384));
        double[] real = [.. spectrum.Points.Select(c => c.Real)];
        double top = Lines.TopIndex(real, 0, real.Length - 1);
        double ppm = spectrum.FirstPpm + (top * spectrum.PpmPerPoint);
        Assert.Equal(MadeFid.Ppm(hertz), ppm, 0.02 * -spectrum.PpmPerPoint);
    }

    /// <summary>The mean over all points is the first value of the FID, half of it as the transform is one-sided.</summary>
    [Fact]
    public void GivesALineItsAreaAndNoOffset()
    {
        ComplexSpectrum spectrum = FidTransform.Transform(MadeFid.Of([new(300, 2, 4)], points: 16384));
        double[] real = [.. spectrum.Points.Select(c => c.Real)];
        Assert.Equal(1, real.Sum() / spectrum.Points.Length, 1e-9);

        // Far from a line of height h and width w the tail is h·w²/(4d²): 2.5e-7 of the height at 4000 w. An unhalved
        // first point would lift it by half the amplitude, 1e-3 of the height.
        double far = real[50];
        Assert.True(Math.Abs(far) < 2e-5 * real.Max(), $"{far / real.Max()}");
    }

    [Theory]
    [InlineData(67.98)]
    [InlineData(null)]
    public void ADelayOf67Point98PointsMovesNoLineAndLeavesNoPhase(double? stated)
    {
        Decay[] lines = [new(1500, 1, 3), new(900, 0.6, 3), new(-400, 1.5, 3), new(-1480, 0.8, 3)];
        FidMeasurement fid = MadeFid.Filtered(lines, stated, points: 8192, phaseDegrees: 40);
        ComplexSpectrum spectrum = FidTransform.Transform(fid);
        Assert.Equal(stated is null, spectrum.DelayDerived);
        Assert.Equal(67.98, spectrum.GroupDelayPoints, stated is null ? 0.6 : 1e-12);
        double reach = stated is null ? 6 * Math.PI : Math.PI;
        (double zero, double first) = AutoPhase.Find(spectrum.Points, fid.DwellSeconds, reach, reach);
        Complex[] phased = AutoPhase.Apply(spectrum.Points, zero, first);
        double[] real = [.. phased.Select(c => c.Real)];
        Complex[] undelayed = FidTransform.Transform(MadeFid.Of(lines, points: 8192)).Points;
        foreach (Decay line in lines)
        {
            double index = (MadeFid.Ppm(line.Hertz) - spectrum.FirstPpm) / spectrum.PpmPerPoint;
            double top = Lines.TopIndex(real, (int)index - 30, (int)index + 30);
            Assert.Equal(index, top, 0.1);
            int i = (int)Math.Round(index);
            Assert.Equal(0, (phased[i] / undelayed[i]).Phase * 180 / Math.PI, 0.5);
        }
    }
}
