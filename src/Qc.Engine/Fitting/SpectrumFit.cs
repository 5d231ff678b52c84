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

    /// <summary>Starts whose coarse costs differ by less are both refined, in units of half a squared standard deviation.</summary>
    private const double CloseStarts = 30;
    private const int MostRefined = 2;
    private const double NormalGapHertz = 22;
    private const int StrongMaxima = 16;
    private const double StrongInNoise = 30;

    /// <summary>Stages by which the best start is chosen: only places and amounts move.</summary>
    private static readonly FitStage[] CoarseStages = [new(15, 0.10, 8, true), new(6, 0.10, 8, true)];

    /// <summary>Stages that refine it: couplings and line shape move too.</summary>
    private static readonly FitStage[] FineStages = [new(3, 0.08, 10, false), new(1.2, 0.05, 10, false), new(0, FineMisfitShare, 12, false)];

    /// <summary>Runs the fit. Deterministic.</summary>
    public static FitResult Run(FitInput input, CancellationToken cancellation = default)
    {
        Spectrum spectrum = input.Spectrum;
        ImmutableArray<MeasuredSignal> signals = MeasuredSignals.Find(spectrum, GapHertz(input.Product));
        double width = TypicalWidth(signals, spectrum.NoiseStandardDeviation);
        var claims = ForeignClaims.Of(input, signals);
        ImmutableArray<StartingPlaces> starts = StartingPlaces.Candidates(input, signals, claims, Starts);
        ImmutableArray<Interval> stretches = Stretches(input, signals, claims, starts, width);
        Dictionary<double, double[]> broadened =
            CoarseStages.ToDictionary(s => s.BroadeningHertz, s => Broadening.Apply(spectrum, s.BroadeningHertz));

        var coarse = new List<(FitSetup Setup, FitState State, double Cost)>();
        foreach (StartingPlaces start in starts)
        {
            FitSetup setup = FitSetup.Build(input, signals, claims, start, width);
            FitState? state = null;
            foreach (FitStage stage in CoarseStages)
            {
                state = Run(input, setup, stretches, broadened, stage, width, state, cancellation);
            }

            coarse.Add((setup, state!, state!.Cost + start.Cost + (AbsentGroups(start) * AbsentGroupCost)));
        }

        coarse = [.. coarse.OrderBy(c => c.Cost)];
        FitInput level = WithoutBaseline(input, signals, coarse[0].Setup, coarse[0].State, width);
        broadened = FineStages.ToDictionary(s => s.BroadeningHertz, s => Broadening.Apply(level.Spectrum, s.BroadeningHertz));

        // Broad data hardly tell two ways round a ring apart; starts that are close there are told by their sharp lines.
        FitSetup? bestSetup = null;
        FitState? bestState = null;
        double bestCost = double.PositiveInfinity;
        foreach ((FitSetup setup, FitState state, double cost) in coarse.Where(c => c.Cost < coarse[0].Cost + CloseStarts).Take(MostRefined))
        {
            FitState refined = state;
            foreach (FitStage stage in FineStages)
            {
                refined = Run(level, setup, stretches, broadened, stage, width, refined, cancellation);
            }

            double total = refined.Cost + cost - state.Cost;
            if (total < bestCost)
            {
                (bestSetup, bestState, bestCost) = (setup, refined, total);
            }
        }

        level = WithoutBaseline(input, signals, bestSetup!, bestState!, width);
        var reading = new FitReading(level, signals, bestSetup!, bestState!, width);
        ImmutableArray<KnownSubstance> impurities = ImpuritySearch.Find(level, reading);
        if (!impurities.IsEmpty)
        {
            bestSetup!.AddKnown(impurities, spectrum.FrequencyMHz);
            double[] parameters = [.. bestState!.Parameters, .. bestSetup.Model.Parameters.Skip(bestState.Parameters.Length).Select(p => p.Start)];
            bestState = Refit(level, bestSetup, stretches, width, parameters, cancellation);
        }

        FitGrid grid = FitGrid.Lay(spectrum, level.Spectrum.Intensity, stretches, width, spectrum.NoiseStandardDeviation, FineMisfitShare);
        new ModelFitter(bestSetup!.Model, grid, 0, spectrum.NoiseStandardDeviation, _ => true).AddUncertainties(bestState!);
        return new FitReading(level, signals, bestSetup, bestState!, width).ToResult(spectrum);
    }

    /// <summary>The same input with the smooth part of the residual taken off the spectrum.</summary>
    private static FitInput WithoutBaseline(
        FitInput input, ImmutableArray<MeasuredSignal> signals, FitSetup setup, FitState state, double width)
    {
        Spectrum spectrum = input.Spectrum;
        double[] baseline = ResidualBaseline.Of(spectrum, new FitReading(input, signals, setup, state, width).Modelled);
        return input with { Spectrum = spectrum with { Intensity = [.. spectrum.Intensity.Zip(baseline, (y, b) => y - b)] } };
    }

    /// <summary>Share of the local signal that line-shape faults may amount to in the last stages.</summary>
    internal const double FineMisfitShare = 0.03;

    /// <summary>What an expected group without any signal costs, in units of half a squared standard deviation.</summary>
    internal const double AbsentGroupCost = 30;

    private static int AbsentGroups(StartingPlaces start) =>
        Enumerable.Range(0, start.Placed.Length).Count(g => start.Measured[g] && !start.Placed[g]);

    private static FitState Run(
        FitInput input,
        FitSetup setup,
        ImmutableArray<Interval> stretches,
        Dictionary<double, double[]> broadened,
        FitStage stage,
        double width,
        FitState? previous,
        CancellationToken cancellation)
    {
        double noise = Broadening.Noise(input.Spectrum, stage.BroadeningHertz);
        FitGrid grid = FitGrid.Lay(
            input.Spectrum, broadened[stage.BroadeningHertz], stretches, width + stage.BroadeningHertz, noise, stage.MisfitShare);
        var fitter = new ModelFitter(setup.Model, grid, stage.BroadeningHertz, noise, stage.OnlyPlaces ? setup.IsPlace : _ => true);
        double[] start = previous?.Parameters ?? [.. setup.Model.Parameters.Select(p => p.Start)];
        return fitter.Fit(start, previous?.Amplitudes, stage.Iterations, cancellation);
    }

    private static FitState Refit(
        FitInput input,
        FitSetup setup,
        ImmutableArray<Interval> stretches,
        double width,
        double[] parameters,
        CancellationToken cancellation)
    {
        FitGrid grid = FitGrid.Lay(
            input.Spectrum, input.Spectrum.Intensity, stretches, width, input.Spectrum.NoiseStandardDeviation, FineMisfitShare);
        return new ModelFitter(setup.Model, grid, 0, input.Spectrum.NoiseStandardDeviation, _ => true).Fit(parameters, null, 8, cancellation);
    }

    /// <summary>Lines of one multiplet are no further apart than its largest coupling.</summary>
    internal static double GapHertz(Expectation product)
    {
        double largest = product.Couplings.Select(c => Math.Abs(c.Hertz))
            .Concat(product.HeteroCouplings.Select(c => Math.Abs(c.Hertz)))
            .DefaultIfEmpty(0)
            .Max();
        return Math.Max(NormalGapHertz, 1.2 * largest);
    }

    /// <summary>
    /// Lower quartile of the widths of the strongest maxima that stand clear: overlap only ever widens, and the wiggles
    /// beside strong lines are no lines. Of lines that run into each other the valley hides the half height, so they count
    /// only where nothing stands clearer; spikes of the noise, which are as narrow as its points, only where there is nothing else.
    /// </summary>
    internal static double TypicalWidth(ImmutableArray<MeasuredSignal> signals, double noise)
    {
        foreach ((double clear, double strong) in new[] { (0.9, StrongInNoise), (0.7, StrongInNoise), (0.5, StrongInNoise), (0, StrongInNoise), (0, 0) })
        {
            double[] widths =
            [
                .. signals.SelectMany(s => s.Maxima)
                    .Where(m => m.Prominence >= clear * m.Height && m.Prominence >= strong * noise && m.WidthHertz > 0)
                    .OrderByDescending(m => m.Prominence)
                    .Take(StrongMaxima)
                    .Select(m => m.WidthHertz)
                    .Order(),
            ];
            if (widths.Length >= 2 || (strong == 0 && widths.Length > 0))
            {
                return Math.Clamp(widths[widths.Length / 4], 0.2, 10);
            }
        }

        return 1;
    }

    /// <summary>
    /// The signals that some component of the model draws in some start, with a margin; merged. Signals that nothing in the
    /// model draws would only pull at the feet of the lines that are drawn.
    /// </summary>
    private static ImmutableArray<Interval> Stretches(
        FitInput input,
        ImmutableArray<MeasuredSignal> signals,
        ForeignClaims claims,
        ImmutableArray<StartingPlaces> starts,
        double width)
    {
        double margin = Math.Max(4 * width, 3) / input.Spectrum.FrequencyMHz;
        IEnumerable<int> drawn = starts.SelectMany(s => s.SignalOf)
            .Concat(claims.InternalStandardSignals)
            .Concat(Enumerable.Range(0, signals.Length).Where(claims.IsDrawn))
            .Where(s => s >= 0)
            .Distinct();
        Interval[] raw = [.. drawn.Select(s => new Interval(signals[s].Ppm.Low - margin, signals[s].Ppm.High + margin))];
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

/// <summary>One stage of the fit, at data broadened so that multiplets are smooth.</summary>
/// <param name="BroadeningHertz">Lorentzian broadening of the data.</param>
/// <param name="MisfitShare">Share of the local signal that shape faults may amount to.</param>
/// <param name="Iterations">Most iterations.</param>
/// <param name="OnlyPlaces">Whether only shifts and amounts move.</param>
internal sealed record FitStage(double BroadeningHertz, double MisfitShare, int Iterations, bool OnlyPlaces);
