using System.Collections.Immutable;
using System.Numerics;

namespace Qc.Engine.Processing;

/// <summary>A line of a complex spectrum: place, height and full width at half height in points.</summary>
internal readonly record struct PhaseLine(double Place, double Height, double Width);

/// <summary>A cluster of lines that share a phase.</summary>
/// <param name="Phase">In radians, not wrapped.</param>
/// <param name="Variance">Its variance in rad², by what the fit leaves over.</param>
/// <param name="MeanSquare">Mean square that the fit leaves over, per degree of freedom.</param>
/// <param name="Lines">The lines.</param>
internal sealed record FittedPhase(double Phase, double Variance, double MeanSquare, ImmutableArray<PhaseLine> Lines)
{
    /// <summary>Centre of gravity by squares of heights: where the phase was measured.</summary>
    public double Place => Lines.Sum(l => l.Height * l.Height * l.Place) / Lines.Sum(l => l.Height * l.Height);

    /// <summary>Where most is left over, in phase with the lines.</summary>
    public double WorstPlace(Complex[] values, int first)
    {
        Complex[] left = [.. values];
        TakeOff(left, first);
        Complex turn = Complex.FromPolarCoordinates(1, -Phase);
        return first + Enumerable.Range(0, left.Length).MaxBy(i => (turn * left[i]).Real);
    }

    /// <summary>Takes the lines off values that begin at a point of the spectrum.</summary>
    public void TakeOff(Complex[] values, int first)
    {
        Complex turn = Complex.FromPolarCoordinates(1, Phase);
        foreach (PhaseLine line in Lines)
        {
            Complex height = turn * line.Height;
            for (int i = 0; i < values.Length; i++)
            {
                values[i] -= height / new Complex(1, -2 * (first + i - line.Place) / line.Width);
            }
        }
    }
}

/// <summary>
/// Phase of a cluster of lines in a complex spectrum, by least squares:
///   S(i) ≈ exp(iφ)·Σ_k H_k/(1 − 2i(i − p_k)/w_k) + b₀ + b₁·t,  one φ for the cluster, H_k ≥ 0, t from −1 to 1 over the window, b complex.
/// Absorption and dispersion are fitted together, so that lines may overlap; b takes what lies beneath: baseline from
/// first points that are off, tails of neighbours, the middle of a broad signal. Levenberg–Marquardt from φ = 0: the spectrum must be
/// roughly in phase. The variance of φ comes from what the fit leaves over, so that a cluster that is no such sum counts little.
/// </summary>
internal sealed class ClusterPhase
{
    private const int Rounds = 12;
    private const double SmallestWidth = 0.5;
    private const double LongestStepInWidths = 0.5;
    private const double EnoughChange = 1e-5;
    private const int MostAdded = 3;
    private const double MisfitInNoise = 1.5;
    private const double WorthAdding = 0.9;

    private readonly Complex[] values;
    private readonly int first;
    private readonly int last;
    private readonly int stride;
    private readonly int lines;
    private readonly double[] real;
    private readonly double[] imaginary;

    private ClusterPhase(Complex[] values, int first, int stride, int lines)
    {
        (this.values, this.first, this.stride, this.lines) = (values, first, stride, lines);
        last = first + values.Length - 1;
        real = new double[Count];
        imaginary = new double[Count];
    }

    private int Count => (3 * lines) + 5;

    private int PhaseAt => 3 * lines;

    /// <summary>Phase, variance and lines; null where there are too few points or the fit fails.</summary>
    /// <param name="values">The spectrum in the window, roughly in phase.</param>
    /// <param name="first">Its first point.</param>
    /// <param name="stride">Every so many points are used: what zero filling put between them says nothing new.</param>
    /// <param name="starts">Places of lines and their full widths at half height, in points.</param>
    /// <param name="noise">Standard deviation of the noise of the real part.</param>
    public static FittedPhase? Of(
        Complex[] values, int first, int stride, IReadOnlyList<(double Place, double Width)> starts, double noise)
    {
        FittedPhase? best = Once(values, first, stride, starts);
        for (int added = 0; added < MostAdded && best is not null && best.MeanSquare > MisfitInNoise * noise * noise; added++)
        {
            // What stands out is a line that has no maximum of its own: a shoulder, or a broad one beneath.
            double place = best.WorstPlace(values, first);
            double width = best.Lines.MinBy(l => Math.Abs(l.Place - place)).Width;
            FittedPhase? trial = Once(values, first, stride, [.. best.Lines.Select(l => (l.Place, l.Width)), (place, width)]);
            if (trial is null || trial.MeanSquare > WorthAdding * best.MeanSquare)
            {
                break;
            }

            best = trial;
        }

        return best;
    }

    private static FittedPhase? Once(Complex[] values, int first, int stride, IReadOnlyList<(double Place, double Width)> starts)
    {
        var fit = new ClusterPhase(values, first, stride, starts.Count);
        int numbers = 2 * (((values.Length - 1) / stride) + 1);
        return starts.Count == 0 || numbers < (2 * fit.Count) + 4 ? null : fit.Solve(starts, numbers);
    }

    private FittedPhase? Solve(IReadOnlyList<(double Place, double Width)> starts, int numbers)
    {
        var p = new double[Count];
        for (int k = 0; k < lines; k++)
        {
            (p[k], p[(2 * lines) + k]) = (starts[k].Place, Math.Max(SmallestWidth, starts[k].Width));
            p[lines + k] = Math.Max(0, 0.5 * values[Math.Clamp((int)Math.Round(starts[k].Place), first, last) - first].Real);
        }

        var normal = new NormalEquations(Count);
        double squares = Linearise(p, normal);
        double damping = 1e-3;
        for (int round = 0; round < Rounds; round++)
        {
            double[]? step = normal.Solve(damping, Held(p, normal.Gradient));
            double[]? trial = step is null ? null : Step(p, step);
            double after = trial is null ? double.PositiveInfinity : Squares(trial);
            if (after > squares)
            {
                damping *= 10;
                continue;
            }

            bool enough = squares - after <= EnoughChange * squares;
            (p, squares) = (trial!, after);
            damping = Math.Max(1e-9, damping / 10);
            Linearise(p, normal);
            if (enough)
            {
                break;
            }
        }

        bool[] held = Held(p, normal.Gradient);
        int free = held.Count(h => !h);
        return normal.Inverse(held) is { } inverse && numbers > free
            ? new FittedPhase(
                p[PhaseAt],
                squares / (numbers - free) * inverse[PhaseAt, PhaseAt],
                squares / (numbers - free),
                [.. Enumerable.Range(0, lines).Select(k => new PhaseLine(p[k], p[lines + k], p[(2 * lines) + k]))])
            : null;
    }

    private double Linearise(double[] p, NormalEquations normal)
    {
        normal.Clear();
        double squares = 0;
        Complex turn = Complex.FromPolarCoordinates(1, p[PhaseAt]);
        for (int i = first; i <= last; i += stride)
        {
            Complex sum = Complex.Zero;
            for (int k = 0; k < lines; k++)
            {
                double w = p[(2 * lines) + k];
                double u = 2 * (i - p[k]) / w;
                Complex shape = turn / new Complex(1, -u);
                Complex byU = Complex.ImaginaryOne * shape / new Complex(1, -u);
                double height = p[lines + k];
                sum += height * shape;
                Put(k, -2 * height / w * byU);
                Put(lines + k, shape);
                Put((2 * lines) + k, -height * u / w * byU);
            }

            Put(PhaseAt, Complex.ImaginaryOne * sum);
            double t = Along(i);
            Put(PhaseAt + 1, 1);
            Put(PhaseAt + 2, Complex.ImaginaryOne);
            Put(PhaseAt + 3, t);
            Put(PhaseAt + 4, new Complex(0, t));
            Complex left = values[i - first] - sum - Baseline(p, t);
            squares += (left.Real * left.Real) + (left.Imaginary * left.Imaginary);
            normal.Add(real, left.Real);
            normal.Add(imaginary, left.Imaginary);
        }

        return squares;
    }

    private void Put(int column, Complex value) => (real[column], imaginary[column]) = (value.Real, value.Imaginary);

    private double Squares(double[] p)
    {
        double squares = 0;
        Complex turn = Complex.FromPolarCoordinates(1, p[PhaseAt]);
        for (int i = first; i <= last; i += stride)
        {
            Complex sum = Complex.Zero;
            for (int k = 0; k < lines; k++)
            {
                double u = 2 * (i - p[k]) / p[(2 * lines) + k];
                double share = p[lines + k] / (1 + (u * u));
                sum += new Complex(share, share * u);
            }

            Complex left = values[i - first] - (turn * sum) - Baseline(p, Along(i));
            squares += (left.Real * left.Real) + (left.Imaginary * left.Imaginary);
        }

        return squares;
    }

    private Complex Baseline(double[] p, double t) =>
        new(p[PhaseAt + 1] + (p[PhaseAt + 3] * t), p[PhaseAt + 2] + (p[PhaseAt + 4] * t));

    private double Along(int i) => ((2.0 * (i - first)) / (last - first)) - 1;

    private double[] Step(double[] p, double[] step)
    {
        double shorten = 1;
        for (int k = 0; k < lines; k++)
        {
            double reach = LongestStepInWidths * p[(2 * lines) + k];
            shorten = Math.Min(shorten, reach / Math.Max(reach, Math.Max(Math.Abs(step[k]), Math.Abs(step[(2 * lines) + k]))));
        }

        var next = new double[Count];
        for (int i = 0; i < Count; i++)
        {
            next[i] = Math.Max(LowerBound(i), p[i] + (shorten * step[i]));
        }

        return next;
    }

    private bool[] Held(double[] p, double[] gradient)
    {
        var held = new bool[Count];
        for (int i = 0; i < Count; i++)
        {
            // A line without height has neither place nor width.
            bool lost = i < PhaseAt && i / lines != 1 && p[lines + (i % lines)] <= 0;
            held[i] = lost || (p[i] <= LowerBound(i) && gradient[i] < 0);
        }

        return held;
    }

    private double LowerBound(int i) =>
        i >= 2 * lines && i < PhaseAt ? SmallestWidth : i >= lines && i < 2 * lines ? 0 : double.NegativeInfinity;
}
