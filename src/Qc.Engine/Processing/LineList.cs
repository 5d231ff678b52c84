using System.Collections.Immutable;

namespace Qc.Engine.Processing;

/// <summary>
/// The lines of a spectrum: every signal a sum of pseudo-Voigt lines on a sloping baseline. Lines start at the maxima; where a fit
/// leaves more over than the noise and what an imperfect shim does to the shape, a line is added there, as long as that pays
/// by the Bayesian information criterion (Schwarz 1978, Ann. Stat. 6, 461). Signals are fitted from the largest down,
/// each after the lines of the others, tails and all, have been taken off; then all once more.
/// </summary>
public static class LineList
{
    private const double GapHertz = 22;
    private const double MarginInWidths = 6;
    private const double SmallestMarginHertz = 4;
    private const int MostLinesTogether = 40;
    private const int MostAdded = 4;
    private const double LeftInNoise = 6;

    /// <summary>What shim and spinning do to a shape, as a share of the local signal: left over, but no line.</summary>
    private const double ShapeShare = 0.02;

    /// <summary>Fits all signals, from high to low ppm. Stretches whose fit does not converge are there and say so.</summary>
    public static ImmutableArray<FittedStretch> Of(Spectrum spectrum)
    {
        ArgumentNullException.ThrowIfNull(spectrum);
        ImmutableArray<Part> parts = [.. MeasuredSignals.Find(spectrum, GapHertz).SelectMany(s => Parts(spectrum, s)).Where(p => p.HasRoom)];
        if (parts.IsEmpty)
        {
            return [];
        }

        int[] order = [.. Enumerable.Range(0, parts.Length).OrderByDescending(i => parts[i].Height).ThenBy(i => i)];
        var fitted = new FittedStretch?[parts.Length];
        foreach (int i in order)
        {
            fitted[i] = FitWithAdditions(spectrum, parts[i], Others(spectrum, parts[i], fitted, i));
        }

        foreach (int i in order)
        {
            LineStart[] starts = [.. fitted[i]!.Lines.Select(l => new LineStart(l.Hertz, l.WidthHertz))];
            fitted[i] = LineFit.Fit(spectrum, parts[i].First, Others(spectrum, parts[i], fitted, i), starts, Options(fitted[i]!.Lines[0].GaussianShare));
        }

        return [.. fitted.OfType<FittedStretch>()];
    }

    /// <summary>Points to be fitted together.</summary>
    private sealed record Part(int First, int Last, ImmutableArray<LineStart> Starts, double Height)
    {
        public int Count => Last - First + 1;

        /// <summary>Whether there are clearly more points than parameters.</summary>
        public bool HasRoom => Count > (6 * Starts.Length) + 3;
    }

    private static LineFitOptions Options(double share) => new() { FitGaussianShare = true, GaussianShare = share, BaselineTerms = 2 };

    /// <summary>The maxima of a signal with room beside them; a signal of very many is cut at its deepest valleys, that is its widest gaps.</summary>
    private static IEnumerable<Part> Parts(Spectrum spectrum, MeasuredSignal signal)
    {
        var pending = new Stack<ImmutableArray<Maximum>>([signal.Maxima]);
        while (pending.TryPop(out ImmutableArray<Maximum> maxima))
        {
            if (maxima.Length > MostLinesTogether)
            {
                int cut = Enumerable.Range(1, maxima.Length - 1).MaxBy(k => maxima[k - 1].Hertz - maxima[k].Hertz);
                pending.Push(maxima[cut..]);
                pending.Push(maxima[..cut]);
                continue;
            }

            double margin = Math.Max(SmallestMarginHertz, MarginInWidths * maxima.Max(m => m.WidthHertz));
            int first = Index(spectrum, maxima[0].Hertz + margin);
            int last = Index(spectrum, maxima[^1].Hertz - margin);
            yield return new Part(first, last, [.. maxima.Select(m => new LineStart(m.Hertz, m.WidthHertz))], maxima.Max(m => m.Height));
        }
    }

    private static int Index(Spectrum spectrum, double hertz) =>
        (int)Math.Clamp(Math.Round(spectrum.IndexOf(hertz / spectrum.FrequencyMHz)), 0, spectrum.Count - 1);

    /// <summary>The measured values of a part less the lines of all others fitted so far.</summary>
    private static double[] Others(Spectrum spectrum, Part part, FittedStretch?[] fitted, int own)
    {
        double[] values = spectrum.Intensity[part.First..(part.Last + 1)];
        for (int other = 0; other < fitted.Length; other++)
        {
            if (other == own || fitted[other] is not { Converged: true } stretch)
            {
                continue;
            }

            foreach (FittedLine line in stretch.Lines)
            {
                for (int n = 0; n < values.Length; n++)
                {
                    values[n] -= line.At(Hertz(spectrum, part.First + n));
                }
            }
        }

        return values;
    }

    private static double Hertz(Spectrum spectrum, int index) => spectrum.Ppm(index) * spectrum.FrequencyMHz;

    private static FittedStretch FitWithAdditions(Spectrum spectrum, Part part, double[] values)
    {
        FittedStretch best = LineFit.Fit(spectrum, part.First, values, part.Starts, Options(0));
        for (int added = 0; added < MostAdded && best.ReducedChiSquare > 1; added++)
        {
            if (WorstPlace(spectrum, part, values, best) is not { } place || values.Length <= (6 * (best.Lines.Length + 1)) + 3)
            {
                return best;
            }

            LineStart[] starts =
            [
                .. best.Lines.Select(l => new LineStart(l.Hertz, l.WidthHertz)),
                new LineStart(place, best.Lines.MinBy(l => Math.Abs(l.Hertz - place)).WidthHertz),
            ];
            FittedStretch trial = LineFit.Fit(spectrum, part.First, values, starts, Options(best.Lines[0].GaussianShare));
            double independent = values.Length / spectrum.NoiseCorrelationPoints;
            double gain = independent * (best.ReducedChiSquare - trial.ReducedChiSquare) / Math.Max(1, trial.ReducedChiSquare);
            if (!trial.Converged || trial.Lines.Any(l => l.Area < 0) || gain < 3 * Math.Log(independent))
            {
                return best;
            }

            best = trial;
        }

        return best;
    }

    /// <summary>Where most is left over in units of noise and shape, in Hz; null where nothing stands out.</summary>
    private static double? WorstPlace(Spectrum spectrum, Part part, double[] values, FittedStretch fit)
    {
        double? place = null;
        double worst = LeftInNoise;
        for (int n = 0; n < values.Length; n++)
        {
            double hertz = Hertz(spectrum, part.First + n);
            double model = fit.BaselineAt(n, values.Length) + fit.Lines.Sum(l => l.At(hertz));
            double allowed = Math.Sqrt(Math.Pow(spectrum.NoiseStandardDeviation, 2) + Math.Pow(ShapeShare * model, 2));
            double left = (values[n] - model) / Math.Max(allowed, 1e-300);
            if (left > worst)
            {
                (place, worst) = (hertz, left);
            }
        }

        return place;
    }
}
