using System.Numerics;
using Qc.Engine.Processing;
using Xunit;

namespace Qc.Engine.Tests.Processing;

/// <summary>Truth: the phases that were put on a spectrum whose phase is known to be zero.</summary>
public class AutoPhaseTests
{
    /// <summary>
    /// At S/N 20 the noise alone allows a standard error of 0.75 degree at the outermost line (Cramér–Rao bound of the phase
    /// of a Lorentzian line of height h and half width of a points, σ²/(h²πa) rad², twice that after one zero filling,
    /// carried through the straight line); fading in costs some of the signal, so 1 degree, of which four are granted to 48 draws.
    /// </summary>
    [Theory]
    [InlineData(200, 1)]
    [InlineData(20, 4)]
    public void RecoversRandomPhasesOfSharpAndBroadLines(double signalToNoise, double degrees)
    {
        Decay[] lines = [new(1700, 1, 2.5), new(1650, 0.7, 2.5), new(600, 8, 40), new(-300, 1.2, 3), new(-1250, 1.5, 2), new(-1240, 1.5, 2)];
        const int Points = 8192;
        double height = 1.2 * MadeFid.SweepHertz / (Math.PI * 3);
        double noise = height / signalToNoise / Math.Sqrt(Points);
        for (int seed = 1; seed <= 8; seed++)
        {
            ComplexSpectrum made = FidTransform.Transform(MadeFid.Of(lines, Points, noise, seed));
            var random = new Random(seed);
            double zero = ((2 * random.NextDouble()) - 1) * Math.PI;
            double first = ((2 * random.NextDouble()) - 1) * Math.PI;
            Complex[] turned = AutoPhase.Apply(made.Points, zero, first);
            (double foundZero, double foundFirst) = AutoPhase.Find(turned, 1 / MadeFid.SweepHertz, Math.PI, Math.PI);
            foreach (Decay line in lines)
            {
                double x = (MadeFid.Ppm(line.Hertz) - made.FirstPpm) / made.PpmPerPoint / made.Points.Length;
                double left = Math.IEEERemainder(zero + foundZero + ((first + foundFirst) * x), 2 * Math.PI) * 180 / Math.PI;
                Assert.True(Math.Abs(left) < degrees, $"seed {seed}: {left:F2} degrees are left at {line.Hertz} Hz");
            }
        }
    }

    [Fact]
    public void IsNotLedByALineAHundredTimesTheOthers()
    {
        Decay[] lines = [new(1700, 1, 2), new(900, 0.7, 2), new(100, 0.5, 2), new(-1800, 100, 2)];
        ComplexSpectrum made = FidTransform.Transform(MadeFid.Of(lines, noise: 0.002));
        Complex[] turned = AutoPhase.Apply(made.Points, 2, -1.5);
        (double zero, double first) = AutoPhase.Find(turned, 1 / MadeFid.SweepHertz, Math.PI, Math.PI);
        foreach (Decay line in lines)
        {
            double x = (MadeFid.Ppm(line.Hertz) - made.FirstPpm) / made.PpmPerPoint / made.Points.Length;
            double left = Math.IEEERemainder(2 + zero + ((first - 1.5) * x), 2 * Math.PI) * 180 / Math.PI;
            Assert.True(Math.Abs(left) < 1, $"{left:F2} degrees are left at {line.Hertz} Hz");
        }
    }

    [Fact]
    public void LeavesANoiseOnlySpectrumAsItIs()
    {
        Complex[] spectrum = FidTransform.Transform(MadeFid.Of([], noise: 1)).Points;
        Assert.Equal((0, 0), AutoPhase.Find(spectrum, 1 / MadeFid.SweepHertz, Math.PI, Math.PI));
    }
}
