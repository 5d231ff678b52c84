using System.Collections.Immutable;
using Qc.Engine.Prediction;
using Qc.Engine.Processing;
using Qc.Engine.Values;

namespace Qc.Engine.Fitting;

/// <summary>
/// Fits the expected substance, the solvent, water, reference, internal standard and known impurities to the whole
/// spectrum as one model. Several starting assignments are tried coarsely; the best is refined in steps of falling line
/// width; what is left over is compared with the known impurities, which then join the model.
/// </summary>
public static class SpectrumFit
{
    private const int Starts = 3;
    private const double NormalGapHertz = 22;
    private static readonly double[] CoarseBroadeningsHertz = [15, 5];
    private static readonly double[] FineBroadeningsHertz = [1.5, 0];

    /// <summary>Runs the fit. Deterministic.</summary>
    public static FitResult Run(FitInput input, CancellationToken cancellation = default)
    {
        Spectrum spectrum = input.Spectrum;
        ImmutableArray<MeasuredSignal> signals = MeasuredSignals.Find(spectrum, GapHertz(input.Product));
        double width = TypicalWidth(signals);
        var claims = ForeignClaims.Of(input, signals);
        ImmutableArray<StartingPlaces> starts = StartingPlaces.Candidates(input, signals, claims, Starts);
        ImmutableArray<Interval> stretches = Stretches(input, signals, starts, width);
        Dictionary<double, double[]> broadened =
            CoarseBroadeningsHertz.Concat(FineBroadeningsHertz).ToDictionary(b => b, b => Broadening.Apply(spectrum, b));

        FitSetup? bestSetup = null;
        FitState? bestState = null;
        double bestCost = double.PositiveInfinity;
        foreach (StartingPlaces start in starts)
        {
            FitSetup setup = FitSetup.Build(input, signals, claims, start, width);
            FitState? state = null;
            foreach (double broadening in CoarseBroadeningsHertz)
            {
                state = Stage(input, setup, stretches, broadened[broadening], broadening, width, state, 0.10, 8, cancellation);
            }

            double cost = state!.Cost + (AbsentGroups(start) * AbsentGroupCost);
            if (cost < bestCost)
            {
                (bestSetup, bestState, bestCost) = (setup, state, cost);
            }
        }

        foreach (double broadening in FineBroadeningsHertz)
        {
            bestState = Stage(input, bestSetup!, stretches, broadened[broadening], broadening, width, bestState, FineMisfitShare, 14, cancellation);
        }

        var reading = new FitReading(input, signals, bestSetup!, bestState!, width);
        ImmutableArray<KnownSubstance> impurities = ImpuritySearch.Find(input, reading);
        if (!impurities.IsEmpty)
        {
            bestSetup!.AddKnown(impurities, spectrum.FrequencyMHz);
            double[] parameters = [.. bestState!.Parameters, .. bestSetup.Model.Parameters.Skip(bestState.Parameters.Length).Select(p => p.Start)];
            bestState = Refit(input, bestSetup, stretches, broadened, width, parameters, cancellation);
        }

        FitGrid grid = FitGrid.Lay(spectrum, spectrum.Intensity, stretches, width, spectrum.NoiseStandardDeviation, FineMisfitShare);
        new ModelFitter(bestSetup!.Model, grid, 0, spectrum.NoiseStandardDeviation).AddUncertainties(bestState!);
        return new FitReading(input, signals, bestSetup, bestState!, width).ToResult();
    }

    /// <summary>Share of the local signal that line-shape faults may amount to in the last stages.</summary>
    internal const double FineMisfitShare = 0.03;

    /// <summary>What an expected group without any signal costs, in units of half a squared standard deviation.</summary>
    internal const double AbsentGroupCost = 30;

    private static int AbsentGroups(StartingPlaces start) =>
        Enumerable.Range(0, start.Placed.Length).Count(g => start.Measured[g] && !start.Placed[g]);

    private static FitState Stage(
        FitInput input,
        FitSetup setup,
        ImmutableArray<Interval> stretches,
        double[] intensity,
        double broadening,
        double width,
        FitState? previous,
        double misfitShare,
        int iterations,
        CancellationToken cancellation)
    {
        double noise = Broadening.Noise(input.Spectrum, broadening);
        FitGrid grid = FitGrid.Lay(input.Spectrum, intensity, stretches, width + broadening, noise, misfitShare);
        var fitter = new ModelFitter(setup.Model, grid, broadening, noise);
        double[] start = previous?.Parameters ?? [.. setup.Model.Parameters.Select(p => p.Start)];
        return fitter.Fit(start, previous?.Amplitudes, iterations, cancellation);
    }

    private static FitState Refit(
        FitInput input,
        FitSetup setup,
        ImmutableArray<Interval> stretches,
        Dictionary<double, double[]> broadened,
        double width,
        double[] parameters,
        CancellationToken cancellation)
    {
        FitGrid grid = FitGrid.Lay(
            input.Spectrum, broadened[0], stretches, width, input.Spectrum.NoiseStandardDeviation, FineMisfitShare);
        return new ModelFitter(setup.Model, grid, 0, input.Spectrum.NoiseStandardDeviation).Fit(parameters, null, 8, cancellation);
    }

    /// <summary>Lines of one multiplet are no further apart than its largest coupling.</summary>
    private static double GapHertz(Expectation product)
    {
        double largest = product.Couplings.Select(c => Math.Abs(c.Hertz))
            .Concat(product.HeteroCouplings.Select(c => Math.Abs(c.Hertz)))
            .DefaultIfEmpty(0)
            .Max();
        return Math.Max(NormalGapHertz, 1.2 * largest);
    }

    /// <summary>Lower quartile of the widths of the maxima that stand clear: overlap only ever widens.</summary>
    private static double TypicalWidth(ImmutableArray<MeasuredSignal> signals)
    {
        double[] widths =
        [
            .. signals.SelectMany(s => s.Maxima)
                .Where(m => m.Prominence > 0.6 * m.Height && m.WidthHertz > 0)
                .Select(m => m.WidthHertz)
                .Order(),
        ];
        return widths.Length == 0 ? 1 : Math.Clamp(widths[widths.Length / 4], 0.2, 6);
    }

    /// <summary>All signals, and the places where a group is expected but has none; merged.</summary>
    private static ImmutableArray<Interval> Stretches(
        FitInput input, ImmutableArray<MeasuredSignal> signals, ImmutableArray<StartingPlaces> starts, double width)
    {
        double margin = Math.Max(12 * width, 8) / input.Spectrum.FrequencyMHz;
        var raw = signals.Select(s => new Interval(s.Ppm.Low - margin, s.Ppm.High + margin)).ToList();
        foreach (StartingPlaces start in starts)
        {
            for (int g = 0; g < start.StartPpm.Length; g++)
            {
                if (start.Placed[g])
                {
                    double reach = (2 * StartingPlaces.RmsHertz(input.Product, g) / input.Spectrum.FrequencyMHz) + margin;
                    raw.Add(new Interval(start.StartPpm[g] - reach, start.StartPpm[g] + reach));
                }
            }
        }

        var merged = new List<Interval>();
        foreach (Interval interval in raw.OrderBy(i => i.Low))
        {
            if (merged.Count > 0 && merged[^1].High >= interval.Low)
            {
                merged[^1] = new Interval(merged[^1].Low, Math.Max(merged[^1].High, interval.High));
            }
            else
            {
                merged.Add(interval);
            }
        }

        return [.. merged];
    }
}
