using MathNet.Numerics.LinearAlgebra;
using MathNet.Numerics.LinearAlgebra.Double;

namespace Qc.Engine.Fitting;

/// <summary>Where a fit stopped, and why.</summary>
internal sealed class FitState
{
    public required double[] Parameters { get; init; }

    /// <summary>Amplitudes, then one common value per tie.</summary>
    public required double[] Amplitudes { get; init; }

    /// <summary>Half the weighted sum of squares, priors and ties included.</summary>
    public required double Cost { get; init; }

    /// <summary>The part of <see cref="Cost"/> that comes from the data.</summary>
    public required double DataCost { get; init; }

    /// <summary>True where the last steps changed the cost by less than the tolerance; false where iterations ran out.</summary>
    public required bool Converged { get; init; }

    public required int Iterations { get; init; }

    /// <summary>Standard uncertainties of the parameters; NaN where the data do not determine one.</summary>
    public double[] ParameterUncertainties { get; set; } = [];

    /// <summary>Standard uncertainties of the amplitudes.</summary>
    public double[] AmplitudeUncertainties { get; set; } = [];
}

/// <summary>
/// Least squares for M(x) = Σ c_a Σ_l I_l V(x − ν_l(θ)): amplitudes c are linear and solved exactly at each step
/// (variable projection, Golub and Pereyra 1973; step from the joint normal equations, Kaufman 1975), parameters θ by
/// Levenberg–Marquardt (Marquardt 1963). Priors and ties enter as further observations. The dependence of line
/// intensities on θ is left out of the Jacobian (not of the model), which costs iterations, not accuracy.
/// </summary>
internal sealed class ModelFitter
{
    private const int MaximumReachInWidths = 250;
    private readonly FitModel _model;
    private readonly FitGrid _grid;
    private readonly double _broadeningHertz;
    private readonly double _noise;
    private readonly int _linearCount;
    private readonly int _tieCount;
    private readonly bool[] _moves;

    /// <param name="model">What to fit.</param>
    /// <param name="grid">What to fit it to.</param>
    /// <param name="broadeningHertz">Lorentzian broadening already applied to the data.</param>
    /// <param name="noise">Standard deviation of the noise, to decide how far the tail of a line is drawn.</param>
    /// <param name="moves">Which parameters may move, by index.</param>
    public ModelFitter(FitModel model, FitGrid grid, double broadeningHertz, double noise, Func<int, bool> moves)
    {
        _moves = [.. Enumerable.Range(0, model.Parameters.Count).Select(moves)];
        _model = model;
        _grid = grid;
        _broadeningHertz = broadeningHertz;
        _noise = noise;
        _tieCount = model.Amplitudes.Count == 0 ? 0 : Math.Max(0, model.Amplitudes.Max(a => a.TiedTo) + 1);
        _linearCount = model.Amplitudes.Count + _tieCount;
    }

    /// <summary>Fits from a start. <paramref name="amplitudes"/> may be null: then a first guess is made from the areas.</summary>
    public FitState Fit(double[] start, double[]? amplitudes, int maximumIterations, CancellationToken cancellation)
    {
        double[] parameters = Bounded(start);
        double[] linear = amplitudes is null ? GuessAmplitudes(parameters) : (double[])amplitudes.Clone();
        LineSheet sheet = _model.Lines(parameters);
        var columns = new ColumnSet(_grid, _model.Amplitudes.Count);
        Render(sheet, parameters, linear, columns);
        linear = SolveAmplitudes(columns, linear);
        (double cost, double dataCost) = Cost(columns, parameters, linear);

        double damping = 1e-2;
        bool converged = false;
        int quiet = 0;
        int iteration = 0;
        for (; iteration < maximumIterations && !converged; iteration++)
        {
            cancellation.ThrowIfCancellationRequested();
            (Matrix<double> normal, Vector<double> gradient) = NormalEquations(sheet, parameters, linear, columns, withLinear: true);
            bool accepted = false;
            for (int attempt = 0; attempt < 6 && !accepted; attempt++)
            {
                double[]? step = Step(normal, gradient, damping);
                if (step is null)
                {
                    damping *= 10;
                    continue;
                }

                double[] candidate = Bounded(Stepped(parameters, step));
                LineSheet candidateSheet = _model.Lines(candidate);
                var candidateColumns = new ColumnSet(_grid, _model.Amplitudes.Count);
                Render(candidateSheet, candidate, linear, candidateColumns);
                double[] candidateLinear = SolveAmplitudes(candidateColumns, linear);
                (double candidateCost, double candidateDataCost) = Cost(candidateColumns, candidate, candidateLinear);
                if (candidateCost < cost)
                {
                    quiet = cost - candidateCost < 1e-4 * cost ? quiet + 1 : 0;
                    (parameters, linear, sheet, columns) = (candidate, candidateLinear, candidateSheet, candidateColumns);
                    (cost, dataCost) = (candidateCost, candidateDataCost);
                    damping = Math.Max(1e-7, damping / 5);
                    accepted = true;
                }
                else
                {
                    damping *= 6;
                }
            }

            converged = !accepted || quiet >= 2;
        }

        return new FitState
        {
            Parameters = parameters,
            Amplitudes = linear,
            Cost = cost,
            DataCost = dataCost,
            Converged = converged,
            Iterations = iteration,
        };
    }

    /// <summary>Adds standard uncertainties from the inverse of the normal matrix at the solution.</summary>
    public void AddUncertainties(FitState state)
    {
        LineSheet sheet = _model.Lines(state.Parameters);
        var columns = new ColumnSet(_grid, _model.Amplitudes.Count);
        Render(sheet, state.Parameters, state.Amplitudes, columns);
        (Matrix<double> normal, _) = NormalEquations(sheet, state.Parameters, state.Amplitudes, columns, withLinear: true);
        int p = _model.Parameters.Count;
        int n = normal.RowCount;
        var scale = new double[n];
        for (int i = 0; i < n; i++)
        {
            scale[i] = normal[i, i] > 0 ? 1 / Math.Sqrt(normal[i, i]) : 0;
        }

        var scaled = DenseMatrix.Create(n, n, (i, j) => normal[i, j] * scale[i] * scale[j]);
        for (int i = 0; i < n; i++)
        {
            scaled[i, i] += scale[i] == 0 ? 1 : 1e-10;
        }

        Matrix<double> inverse = scaled.Inverse();
        double Uncertainty(int i) => scale[i] == 0 || !(inverse[i, i] > 0) ? double.NaN : Math.Sqrt(inverse[i, i]) * scale[i];
        state.ParameterUncertainties = [.. Enumerable.Range(0, p).Select(Uncertainty)];
        state.AmplitudeUncertainties = [.. Enumerable.Range(p, n - p).Select(Uncertainty)];
    }

    /// <summary>The model at the grid points.</summary>
    public double[] Modelled(FitState state)
    {
        var columns = new ColumnSet(_grid, _model.Amplitudes.Count);
        Render(_model.Lines(state.Parameters), state.Parameters, state.Amplitudes, columns);
        return columns.Sum(state.Amplitudes);
    }

    private double[] Bounded(double[] parameters)
    {
        var result = new double[parameters.Length];
        for (int i = 0; i < parameters.Length; i++)
        {
            result[i] = Math.Clamp(parameters[i], _model.Parameters[i].Low, _model.Parameters[i].High);
        }

        return result;
    }

    private double[] Stepped(double[] parameters, double[] step)
    {
        var result = new double[parameters.Length];
        for (int i = 0; i < parameters.Length; i++)
        {
            double largest = _model.Parameters[i].LargestStep;
            result[i] = parameters[i] + Math.Clamp(step[i], -largest, largest);
        }

        return result;
    }

    private double[] GuessAmplitudes(double[] parameters)
    {
        LineSheet sheet = _model.Lines(parameters);
        double area = 0;
        for (int i = 1; i < _grid.Count; i++)
        {
            double gap = _grid.Hertz[i - 1] - _grid.Hertz[i];
            area += gap < 30 ? Math.Max(0, _grid.Intensity[i]) * gap : 0;
        }

        double total = Math.Max(sheet.Intensity.Sum(), 1e-9);
        var guess = new double[_linearCount];
        Array.Fill(guess, area / total);
        return guess;
    }

    private LineShape ShapeOf(double lnWidth, double[] parameters)
    {
        double own = Math.Exp(lnWidth);
        double width = own + _broadeningHertz;
        return new LineShape(width, parameters[_model.ShareParameter] * own / width);
    }

    private double ReachHertz(double width, double height) =>
        Math.Clamp(0.5 * width * Math.Sqrt(Math.Max(0, height) / (0.1 * _noise)), 6 * width, MaximumReachInWidths * width);

    private void Render(LineSheet sheet, double[] parameters, double[] amplitudes, ColumnSet columns)
    {
        for (int line = 0; line < sheet.Count; line++)
        {
            LineShape shape = ShapeOf(parameters[sheet.WidthParameter[line]], parameters);
            int column = sheet.Amplitude[line];
            double intensity = sheet.Intensity[line];
            double height = Math.Max(amplitudes[column], 1e-300) * intensity * 2 / (Math.PI * shape.WidthHertz);
            (int first, int end) = _grid.Around(sheet.Hertz[line], ReachHertz(shape.WidthHertz, height));
            double[] values = columns.Touch(column, first, end);
            double centre = sheet.Hertz[line];
            for (int i = first; i < end; i++)
            {
                values[i] += intensity * shape.At(_grid.Hertz[i] - centre);
            }
        }
    }

    /// <summary>Weighted, tied, non-negative least squares for the amplitudes.</summary>
    private double[] SolveAmplitudes(ColumnSet columns, double[] previous)
    {
        if (_linearCount == 0)
        {
            return []; // Nothing of the structure, and no other substance, has signal in this spectrum.
        }

        int amplitudes = _model.Amplitudes.Count;
        var normal = DenseMatrix.Create(_linearCount, _linearCount, 0);
        var right = DenseVector.Create(_linearCount, 0);
        columns.AccumulateLinear(normal, right);
        AddTies(normal, previous, 0);
        double largest = Math.Max(normal.Diagonal().Maximum(), 1e-300);
        var fixedAtZero = new bool[_linearCount];
        double[] solution = previous;
        for (int round = 0; round <= amplitudes; round++)
        {
            var free = Enumerable.Range(0, _linearCount).Where(i => !fixedAtZero[i]).ToArray();
            var reduced = DenseMatrix.Create(free.Length, free.Length, (i, j) => normal[free[i], free[j]] + (i == j ? 1e-12 * largest : 0));
            var reducedRight = DenseVector.Create(free.Length, i => right[free[i]]);
            Vector<double> answer = reduced.Solve(reducedRight);
            solution = new double[_linearCount];
            bool negative = false;
            for (int i = 0; i < free.Length; i++)
            {
                double value = double.IsFinite(answer[i]) ? answer[i] : 0;
                if (value < 0 && free[i] < amplitudes)
                {
                    fixedAtZero[free[i]] = true;
                    negative = true;
                    value = 0;
                }

                solution[free[i]] = value;
            }

            if (!negative)
            {
                break;
            }
        }

        return solution;
    }

    /// <summary>Adds (c_a − s_t)/(share·s₀) = 0 for every tied amplitude.</summary>
    private void AddTies(Matrix<double> normal, double[] previous, int offset)
    {
        int amplitudes = _model.Amplitudes.Count;
        for (int a = 0; a < amplitudes; a++)
        {
            FitAmplitude amplitude = _model.Amplitudes[a];
            if (amplitude.TiedTo < 0)
            {
                continue;
            }

            int common = amplitudes + amplitude.TiedTo;
            double expected = Math.Max(Math.Abs(previous[common]), 1e-300);
            double weight = 1 / (amplitude.TieShare * amplitude.TieShare * expected * expected);
            normal[offset + a, offset + a] += weight;
            normal[offset + common, offset + common] += weight;
            normal[offset + a, offset + common] -= weight;
            normal[offset + common, offset + a] -= weight;
        }
    }

    private (double Cost, double DataCost) Cost(ColumnSet columns, double[] parameters, double[] linear)
    {
        double data = columns.HalfSumOfSquares(linear);
        double prior = 0;
        for (int i = 0; i < parameters.Length; i++)
        {
            FitParameter parameter = _model.Parameters[i];
            double z = (parameters[i] - parameter.PriorMean) / parameter.PriorStandardUncertainty;
            prior += 0.5 * z * z;
        }

        for (int a = 0; a < _model.Amplitudes.Count; a++)
        {
            FitAmplitude amplitude = _model.Amplitudes[a];
            if (amplitude.TiedTo >= 0)
            {
                double common = linear[_model.Amplitudes.Count + amplitude.TiedTo];
                double z = (linear[a] - common) / (amplitude.TieShare * Math.Max(Math.Abs(common), 1e-300));
                prior += 0.5 * z * z;
            }
        }

        return (data + prior, data);
    }

    private (Matrix<double> Normal, Vector<double> Gradient) NormalEquations(
        LineSheet sheet, double[] parameters, double[] linear, ColumnSet columns, bool withLinear)
    {
        int p = _model.Parameters.Count;
        var derivatives = new ColumnSet(_grid, p);
        for (int line = 0; line < sheet.Count; line++)
        {
            int widthParameter = sheet.WidthParameter[line];
            double own = Math.Exp(parameters[widthParameter]);
            LineShape shape = ShapeOf(parameters[widthParameter], parameters);
            double area = linear[sheet.Amplitude[line]] * sheet.Intensity[line];
            if (area == 0)
            {
                continue;
            }

            double height = area * 2 / (Math.PI * shape.WidthHertz);
            (int first, int end) = _grid.Around(sheet.Hertz[line], Math.Min(ReachHertz(shape.WidthHertz, height), 40 * shape.WidthHertz));
            double[] byWidth = derivatives.Touch(widthParameter, first, end);
            double[] byShare = derivatives.Touch(_model.ShareParameter, first, end);
            int gradientStart = sheet.GradientStart[line];
            int gradientCount = sheet.GradientEnd(line) - gradientStart;
            var byPosition = new double[gradientCount][];
            for (int g = 0; g < gradientCount; g++)
            {
                byPosition[g] = derivatives.Touch(sheet.GradientParameter[gradientStart + g], first, end);
            }

            double shareScale = own / shape.WidthHertz;
            for (int i = first; i < end; i++)
            {
                (_, double byDistance, double byShapeWidth, double byShapeShare) =
                    shape.WithDerivatives(_grid.Hertz[i] - sheet.Hertz[line]);
                byWidth[i] += area * byShapeWidth * own;
                byShare[i] += area * byShapeShare * shareScale;
                for (int g = 0; g < gradientCount; g++)
                {
                    byPosition[g][i] -= area * byDistance * sheet.GradientHertz[gradientStart + g];
                }
            }
        }

        int size = withLinear ? p + _linearCount : p;
        var normal = DenseMatrix.Create(size, size, 0);
        var gradient = DenseVector.Create(size, 0);
        double[] residual = columns.Residual(linear);
        ColumnSet.AccumulateJoint(_grid, derivatives, columns, residual, normal, gradient);
        for (int i = 0; i < p; i++)
        {
            FitParameter parameter = _model.Parameters[i];
            double weight = 1 / (parameter.PriorStandardUncertainty * parameter.PriorStandardUncertainty);
            normal[i, i] += weight;
            gradient[i] -= weight * (parameters[i] - parameter.PriorMean);
        }

        for (int i = 0; i < p; i++)
        {
            if (!_moves[i])
            {
                normal.ClearRow(i);
                normal.ClearColumn(i);
                normal[i, i] = 1;
                gradient[i] = 0;
            }
        }

        AddTies(normal, linear, p);
        for (int a = 0; a < _model.Amplitudes.Count; a++)
        {
            FitAmplitude amplitude = _model.Amplitudes[a];
            if (amplitude.TiedTo >= 0)
            {
                int common = _model.Amplitudes.Count + amplitude.TiedTo;
                double expected = Math.Max(Math.Abs(linear[common]), 1e-300);
                double weight = 1 / (amplitude.TieShare * amplitude.TieShare * expected * expected);
                double difference = linear[a] - linear[common];
                gradient[p + a] -= weight * difference;
                gradient[p + common] += weight * difference;
            }
        }

        return (normal, gradient);
    }

    private static double[]? Step(Matrix<double> normal, Vector<double> gradient, double damping)
    {
        int n = normal.RowCount;
        var damped = (DenseMatrix)normal.Clone();
        for (int i = 0; i < n; i++)
        {
            damped[i, i] = (damped[i, i] * (1 + damping)) + 1e-300;
            if (damped[i, i] < 1e-200)
            {
                damped[i, i] = 1;
            }
        }

        try
        {
            return [.. damped.Cholesky().Solve(gradient)];
        }
        catch (ArgumentException)
        {
            // MathNet reports a matrix that is not positive definite this way; the caller then damps more.
            return null;
        }
    }
}
