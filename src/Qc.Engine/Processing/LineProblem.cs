using System.Collections.Immutable;
using Qc.Engine.Fitting;

namespace Qc.Engine.Processing;

/// <summary>A stretch of a spectrum and the sum of lines that stands for it; parameters in the order that <see cref="LineFit"/> states.</summary>
internal sealed class LineProblem
{
    private const double SmallestWidthInPoints = 0.5;

    /// <summary>Farthest that a line may wander in a round, in widths.</summary>
    private const double LongestStepInWidths = 0.5;

    private readonly double[] values;
    private readonly LineFitOptions options;
    private readonly int lines;
    private readonly double firstHertz;
    private readonly double hertzPerPoint;
    private readonly double[] row;

    public LineProblem(Spectrum spectrum, int first, double[] values, int lines, LineFitOptions options)
    {
        this.values = values;
        this.options = options;
        this.lines = lines;
        firstHertz = spectrum.Ppm(first) * spectrum.FrequencyMHz;
        hertzPerPoint = -spectrum.HzPerPoint;
        row = new double[Count];
    }

    public bool HasWidths => options.KnownWidthHertz is null;

    public int Count => BaselineAt + options.BaselineTerms + (options.FitGaussianShare ? 1 : 0);

    private int BaselineAt => HasWidths ? 3 * lines : 2 * lines;

    private int ShareAt => BaselineAt + options.BaselineTerms;

    private double SmallestWidth => SmallestWidthInPoints * -hertzPerPoint;

    public LineShape Shape(double[] p, int k) => new(
        options.KnownWidthHertz ?? p[(2 * lines) + k], options.FitGaussianShare ? p[ShareAt] : options.GaussianShare);

    /// <summary>Starting places and widths, with the best amplitudes and baseline for them.</summary>
    public double[] Start(IReadOnlyList<LineStart> starts)
    {
        var p = new double[Count];
        for (int k = 0; k < lines; k++)
        {
            p[k] = starts[k].Hertz;
            if (HasWidths)
            {
                p[(2 * lines) + k] = Math.Max(SmallestWidth, starts[k].WidthHertz);
            }
        }

        if (options.FitGaussianShare)
        {
            p[ShareAt] = options.GaussianShare;
        }

        var normal = new NormalEquations(Count);
        Linearise(p, normal);
        var held = new bool[Count];
        for (int i = 0; i < Count; i++)
        {
            held[i] = !IsLinear(i);
        }

        if (normal.Solve(0, held) is { } linear)
        {
            for (int i = 0; i < Count; i++)
            {
                p[i] += linear[i];
            }
        }

        return p;
    }

    private bool IsLinear(int i) => (i >= lines && i < 2 * lines) || (i >= BaselineAt && i < ShareAt);

    /// <summary>Fills JᵀJ and Jᵀr; the sum of squares left.</summary>
    public double Linearise(double[] p, NormalEquations normal)
    {
        normal.Clear();
        double squares = 0;
        double byShare = 0;
        for (int n = 0; n < values.Length; n++)
        {
            double x = firstHertz + (n * hertzPerPoint);
            double model = Baseline(p, n);
            byShare = 0;
            for (int k = 0; k < lines; k++)
            {
                (double value, double byDistance, double byWidth, double share) = Shape(p, k).WithDerivatives(x - p[k]);
                double area = p[lines + k];
                model += area * value;
                row[k] = -area * byDistance;
                row[lines + k] = value;
                byShare += area * share;
                if (HasWidths)
                {
                    row[(2 * lines) + k] = area * byWidth;
                }
            }

            for (int b = 0; b < options.BaselineTerms; b++)
            {
                row[BaselineAt + b] = b == 0 ? 1 : Along(n);
            }

            if (options.FitGaussianShare)
            {
                row[ShareAt] = byShare;
            }

            double left = values[n] - model;
            squares += left * left;
            normal.Add(row, left);
        }

        return squares;
    }

    public double Squares(double[] p)
    {
        double squares = 0;
        for (int n = 0; n < values.Length; n++)
        {
            double left = values[n] - Baseline(p, n);
            double x = firstHertz + (n * hertzPerPoint);
            for (int k = 0; k < lines; k++)
            {
                left -= p[lines + k] * Shape(p, k).At(x - p[k]);
            }

            squares += left * left;
        }

        return squares;
    }

    /// <summary>Adds a step, shortened where a line would leap, and kept within bounds.</summary>
    public double[] Step(double[] p, double[] step)
    {
        double shorten = 1;
        for (int k = 0; k < lines; k++)
        {
            double reach = LongestStepInWidths * Shape(p, k).WidthHertz;
            shorten = Math.Min(shorten, reach / Math.Max(reach, Math.Abs(step[k])));
            if (HasWidths)
            {
                shorten = Math.Min(shorten, reach / Math.Max(reach, Math.Abs(step[(2 * lines) + k])));
            }
        }

        var next = new double[p.Length];
        for (int i = 0; i < p.Length; i++)
        {
            next[i] = Bounded(i, p[i] + (shorten * step[i]));
        }

        return next;
    }

    /// <summary>Parameters that stand at a bound and are pushed against it.</summary>
    public bool[] Held(double[] p, double[] gradient)
    {
        var held = new bool[p.Length];
        for (int i = 0; i < p.Length; i++)
        {
            double pushed = p[i] + (Math.Sign(gradient[i]) * 1e-9);
            held[i] = (IsWidth(i) || IsShare(i)) && Bounded(i, p[i]) == p[i] && Bounded(i, pushed) != pushed;
        }

        return held;
    }

    private double Bounded(int i, double value) =>
        IsWidth(i) ? Math.Max(SmallestWidth, value) : IsShare(i) ? Math.Clamp(value, 0, 1) : value;

    private bool IsWidth(int i) => HasWidths && i >= 2 * lines && i < 3 * lines;

    private bool IsShare(int i) => options.FitGaussianShare && i == ShareAt;

    public ImmutableArray<double> BaselineOf(double[] p) => [.. p.AsSpan(BaselineAt, options.BaselineTerms)];

    private double Along(int n) => ((2.0 * n) / (values.Length - 1)) - 1;

    private double Baseline(double[] p, int n) => options.BaselineTerms switch
    {
        0 => 0,
        1 => p[BaselineAt],
        _ => p[BaselineAt] + (p[BaselineAt + 1] * Along(n)),
    };
}
