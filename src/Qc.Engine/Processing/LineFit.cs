using System.Collections.Immutable;
using Qc.Engine.Fitting;
using Qc.Engine.Values;

namespace Qc.Engine.Processing;

/// <summary>
/// Fits a stretch of a spectrum as a sum of pseudo-Voigt lines by least squares.
/// Model: y(x) = Σ_k A_k·V(x − ν_k; w_k, η) + b₀ + b₁·u, u from −1 to 1 over the stretch. Parameters in this order: ν (all), A (all),
/// w (all, unless known), b, η (if fitted). Levenberg–Marquardt with the analytic Jacobian J and Marquardt's scaling
/// (Marquardt 1963, J. SIAM 11, 431): (JᵀJ + μ·diag JᵀJ)·δ = Jᵀr. The amplitudes, linear in the model, start at their least
/// squares for the starting places and widths. Covariance: σ²·c·max(1, χ²)·(JᵀJ)⁻¹, σ the noise, c the points over which it is
/// correlated (lines being smooth over them), χ² the reduced sum of squares, so that a shape that does not fit is not praised.
/// </summary>
public static class LineFit
{
    private const double SmallestDamping = 1e-9;
    private const double LargestDamping = 1e9;
    private const double SmallestChange = 1e-9;

    /// <summary>Fits the points from <paramref name="first"/> to <paramref name="last"/>, both included.</summary>
    /// <param name="spectrum">The spectrum.</param>
    /// <param name="first">First point.</param>
    /// <param name="last">Last point; there must be more points than parameters.</param>
    /// <param name="starts">Where the lines begin, at least one.</param>
    /// <param name="options">What may move.</param>
    public static FittedStretch Fit(Spectrum spectrum, int first, int last, IReadOnlyList<LineStart> starts, LineFitOptions options)
    {
        ArgumentNullException.ThrowIfNull(spectrum);
        return Fit(spectrum, first, spectrum.Intensity[first..(last + 1)], starts, options);
    }

    /// <summary>The same for values that differ from the spectrum's, e.g. by lines of other stretches that were taken off.</summary>
    internal static FittedStretch Fit(
        Spectrum spectrum, int first, double[] values, IReadOnlyList<LineStart> starts, LineFitOptions options)
    {
        ArgumentNullException.ThrowIfNull(starts);
        ArgumentNullException.ThrowIfNull(options);
        var problem = new LineProblem(spectrum, first, values, starts.Count, options);
        if (starts.Count == 0 || values.Length <= problem.Count)
        {
            throw new ArgumentException("There must be at least one line, and more points than parameters.", nameof(starts));
        }

        double[] p = problem.Start(starts);
        var normal = new NormalEquations(problem.Count);
        double squares = problem.Linearise(p, normal);
        double damping = 1e-3;
        bool converged = false;
        for (int round = 0; round < options.Rounds && !converged; round++)
        {
            bool accepted = false;
            while (!accepted && damping < LargestDamping)
            {
                double[]? step = normal.Solve(damping, problem.Held(p, normal.Gradient));
                double[]? trial = step is null ? null : problem.Step(p, step);
                double after = trial is null ? double.PositiveInfinity : problem.Squares(trial);
                if (after <= squares)
                {
                    converged = squares - after <= SmallestChange * squares;
                    (p, squares, accepted) = (trial!, after, true);
                    damping = Math.Max(SmallestDamping, damping / 9);
                }
                else
                {
                    damping *= 7;
                }
            }

            // Not even the shortest step betters it: this is the bottom, as far as numbers can tell.
            converged |= !accepted;
            squares = problem.Linearise(p, normal);
        }

        return Describe(spectrum, first, values.Length, starts.Count, problem, normal, p, squares, converged);
    }

    private static FittedStretch Describe(
        Spectrum spectrum, int first, int points, int lines, LineProblem problem, NormalEquations normal, double[] p, double squares, bool converged)
    {
        bool[] held = problem.Held(p, normal.Gradient);
        int free = held.Count(h => !h);
        double noise = spectrum.NoiseStandardDeviation;
        double chiSquare = noise > 0 ? squares / (noise * noise) / Math.Max(1, points - free) : 0;
        double scale = noise * noise * spectrum.NoiseCorrelationPoints * Math.Max(1, chiSquare);
        double[,]? inverse = normal.Inverse(held);
        int kept = problem.HasWidths ? 3 * lines : 2 * lines;
        var covariance = new double[kept, kept];
        for (int i = 0; i < kept; i++)
        {
            for (int j = 0; j < kept; j++)
            {
                covariance[i, j] = inverse is null ? double.PositiveInfinity : scale * inverse[i, j];
            }
        }

        LineShape ShapeOf(int k) => problem.Shape(p, k);
        double Deviation(int i) => Math.Sqrt(Math.Max(0, covariance[i, i]));
        ImmutableArray<FittedLine> fitted =
        [
            .. Enumerable.Range(0, lines).Select(k => new FittedLine(
                p[k],
                ShapeOf(k).WidthHertz,
                ShapeOf(k).GaussianShare,
                p[lines + k],
                Deviation(k),
                problem.HasWidths ? Deviation((2 * lines) + k) : 0,
                Deviation(lines + k))),
        ];
        var ppm = new Interval(spectrum.Ppm(first + points - 1), spectrum.Ppm(first));
        return new FittedStretch(ppm, fitted, problem.BaselineOf(p), covariance, chiSquare, converged && inverse is not null);
    }
}
