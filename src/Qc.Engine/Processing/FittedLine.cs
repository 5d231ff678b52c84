using System.Collections.Immutable;
using MathNet.Numerics;
using Qc.Engine.Fitting;
using Qc.Engine.Values;

namespace Qc.Engine.Processing;

/// <summary>Where the fit of a line begins.</summary>
/// <param name="Hertz">Place from 0 ppm.</param>
/// <param name="WidthHertz">Full width at half height, above zero.</param>
public readonly record struct LineStart(double Hertz, double WidthHertz);

/// <summary>A pseudo-Voigt line with its standard uncertainties, which come from the noise and from what the fit leaves over.</summary>
/// <param name="Hertz">Place from 0 ppm.</param>
/// <param name="WidthHertz">Full width at half height.</param>
/// <param name="GaussianShare">Gaussian share of the area, 0 to 1.</param>
/// <param name="Area">Area in intensity × Hz.</param>
/// <param name="HertzDeviation">Standard uncertainty of the place.</param>
/// <param name="WidthDeviation">Standard uncertainty of the width; 0 where the width was given.</param>
/// <param name="AreaDeviation">Standard uncertainty of the area.</param>
public readonly record struct FittedLine(
    double Hertz, double WidthHertz, double GaussianShare, double Area, double HertzDeviation, double WidthDeviation, double AreaDeviation)
{
    private const double TwoRootLn2 = 1.6651092223153954;

    /// <summary>Height at a place in Hz from 0 ppm, in units of intensity.</summary>
    public double At(double hertz) => Area * new LineShape(WidthHertz, GaussianShare).At(hertz - Hertz);

    /// <summary>
    /// Share of the area between two places. Lorentzian: (atan 2(b−ν)/w − atan 2(a−ν)/w)/π, so that ±318.31 widths hold 99.9 %;
    /// Gaussian: by the error function.
    /// </summary>
    public double ShareBetween(double lowHertz, double highHertz)
    {
        double low = (lowHertz - Hertz) / WidthHertz;
        double high = (highHertz - Hertz) / WidthHertz;
        double lorentzian = (Math.Atan(2 * high) - Math.Atan(2 * low)) / Math.PI;
        double gaussian = 0.5 * (SpecialFunctions.Erf(TwoRootLn2 * high) - SpecialFunctions.Erf(TwoRootLn2 * low));
        return ((1 - GaussianShare) * lorentzian) + (GaussianShare * gaussian);
    }
}

/// <summary>What a fit of lines may move.</summary>
public sealed record LineFitOptions
{
    /// <summary>Width that all lines are known to have; null where each has its own, to be fitted.</summary>
    public double? KnownWidthHertz { get; init; }

    /// <summary>Gaussian share of all lines, 0 to 1; where it is fitted, its start.</summary>
    public double GaussianShare { get; init; }

    /// <summary>Whether the Gaussian share, one for all lines, is fitted.</summary>
    public bool FitGaussianShare { get; init; }

    /// <summary>Terms of the baseline beneath the lines: none, a level (1), or a level and a slope (2).</summary>
    public int BaselineTerms { get; init; }

    /// <summary>Most rounds before the fit gives up.</summary>
    public int Rounds { get; init; } = 60;
}

/// <summary>A stretch of a spectrum as a sum of lines.</summary>
/// <param name="Ppm">The stretch.</param>
/// <param name="Lines">Its lines, in the order of their starts.</param>
/// <param name="Baseline">Level in the middle of the stretch, and rise from there to its low-ppm end; as many as were asked for.</param>
/// <param name="Covariance">
/// Covariance of places (Hz), then areas (intensity × Hz), then widths (Hz; none where the width was given): row by row.
/// </param>
/// <param name="ReducedChiSquare">Mean square of what is left over in units of the noise, per degree of freedom: 1 for a perfect fit.</param>
/// <param name="Converged">Whether the last round changed the squares left by less than a thousand-millionth; the values are of no use otherwise.</param>
public sealed record FittedStretch(
    Interval Ppm, ImmutableArray<FittedLine> Lines, ImmutableArray<double> Baseline, double[,] Covariance, double ReducedChiSquare, bool Converged)
{
    /// <summary>Area of all lines.</summary>
    public double Area => Lines.Sum(l => l.Area);

    /// <summary>Standard uncertainty of the area of all lines, their covariances included.</summary>
    public double AreaDeviation
    {
        get
        {
            double sum = 0;
            for (int i = Lines.Length; i < 2 * Lines.Length; i++)
            {
                for (int j = Lines.Length; j < 2 * Lines.Length; j++)
                {
                    sum += Covariance[i, j];
                }
            }

            return Math.Sqrt(Math.Max(0, sum));
        }
    }

    /// <summary>Baseline at a point of the stretch.</summary>
    internal double BaselineAt(int point, int points) => Baseline.Length switch
    {
        0 => 0,
        1 => Baseline[0],
        _ => Baseline[0] + (Baseline[1] * ((2.0 * point / (points - 1)) - 1)),
    };
}
