using System.Collections.Immutable;
using Qc.Engine.Prediction;
using Qc.Engine.Processing;
using Qc.Engine.Structures;
using Qc.Engine.Values;

namespace Qc.Engine.Fitting;

/// <summary>Reads a finished fit: what each component draws, how well, and what is left over.</summary>
internal sealed class FitReading
{
    private const double TailInWidths = 400;

    /// <summary>Most that the misfit of one signal counts in the evidence, in units of half a squared standard deviation.</summary>
    private const double LargestSignalMisfit = 60;
    private const double LargestMisfitShare = 0.2;
    private readonly FitInput _input;
    private readonly ImmutableArray<MeasuredSignal> _signals;
    private readonly FitSetup _setup;
    private readonly FitState _state;
    private readonly LineSheet _lines;
    private readonly Interval?[] _extent;
    private ImmutableArray<LeftOverRegion>? _leftOver;

    public FitReading(FitInput input, ImmutableArray<MeasuredSignal> signals, FitSetup setup, FitState state, double width)
    {
        _input = input;
        _signals = signals;
        _setup = setup;
        _state = state;
        _lines = setup.Model.Lines(state.Parameters);
        WidthHertz = Math.Exp(state.Parameters[setup.Model.WidthParameter]);
        TypicalWidthHertz = width;
        _extent = Extents();
        Modelled = Render(Enumerable.Range(0, setup.Model.Amplitudes.Count));
        (AreaPerProton, AreaPerProtonRelativeUncertainty) = Scale();
    }

    public double WidthHertz { get; }

    public double TypicalWidthHertz { get; }

    public double[] Modelled { get; }

    /// <summary>Worked out when first asked for: most readings are made for the model alone.</summary>
    public ImmutableArray<LeftOverRegion> LeftOver => _leftOver ??= LeftOverSearch.Find(_input.Spectrum, Modelled, WidthHertz);

    public double AreaPerProton { get; }

    public double AreaPerProtonRelativeUncertainty { get; }

    public ImmutableArray<MeasuredSignal> Signals => _signals;

    /// <summary>Names of the other substances already in the model.</summary>
    public IEnumerable<string> KnownNames => _setup.Known.Select(k => k.Substance.Name);

    /// <summary>The result, its model drawn on the spectrum as processed, baseline included.</summary>
    public FitResult ToResult(Spectrum processed)
    {
        double misfitShare = MisfitShare();
        return new FitResult
        {
            Groups = [.. _input.Product.Protons.Groups.Select(Group)],
            Couplings = Couplings(),
            Others = [.. Others()],
            LeftOver = LeftOver,
            AreaPerProton = AreaPerProton,
            AreaPerProtonRelativeUncertainty = AreaPerProtonRelativeUncertainty,
            WidthHertz = WidthHertz,
            MeasuredWidthHertz = TypicalWidthHertz,
            Modelled = [.. Modelled.Select((m, i) => m + processed.Intensity[i] - _input.Spectrum.Intensity[i])],
            Baseline = [.. processed.Intensity.Zip(_input.Spectrum.Intensity, (y, level) => y - level)],
            Converged = _state.Converged,
            MisfitShare = misfitShare,
            LogEvidence = LogEvidence(misfitShare),
        };
    }

    private GroupFit Group(ProtonGroup group)
    {
        int g = group.Index;
        int amplitude = _setup.Product.AmplitudeOf[g];
        bool measured = _input.Spectrum.WindowPpm.Contains(_input.Product.Shifts[g].ShiftPpm);
        if (amplitude < 0 || _extent[amplitude] is not { } region)
        {
            return new GroupFit { Group = g, Measured = measured, Found = false };
        }

        double frequency = _input.Spectrum.FrequencyMHz;
        double protons = AreaPerProton > 0 ? Corrected(amplitude) * group.Count / AreaPerProton : 0;
        double relative = _state.Amplitudes[amplitude] > 0 && _state.AmplitudeUncertainties.Length > amplitude
            ? _state.AmplitudeUncertainties[amplitude] / _state.Amplitudes[amplitude]
            : 1;
        int shift = _setup.Product.ShiftOf[g];
        return new GroupFit
        {
            Group = g,
            Measured = true,
            Found = protons > 0.1 * group.Count,
            ShiftPpm = _state.Parameters[shift] / frequency,
            ShiftStandardUncertaintyPpm = Known(_state.ParameterUncertainties, shift) / frequency,
            Protons = protons,
            ProtonsStandardUncertainty = protons * Math.Sqrt(
                (relative * relative) + (AreaPerProtonRelativeUncertainty * AreaPerProtonRelativeUncertainty)),
            RegionPpm = region,
            PatternMisfit = PatternMisfit(region),
            Alone = Enumerable.Range(0, _extent.Length)
                .All(a => a == amplitude || _extent[a] is not { } other || !other.Overlaps(region) || IsSmall(a, amplitude)),
        };
    }

    private bool IsSmall(int amplitude, int beside) =>
        Area(amplitude) < 0.02 * Area(beside);

    private double Area(int amplitude)
    {
        double sum = 0;
        for (int l = 0; l < _lines.Count; l++)
        {
            sum += _lines.Amplitude[l] == amplitude ? _lines.Intensity[l] : 0;
        }

        return sum * _state.Amplitudes[amplitude];
    }

    private static double Known(double[] uncertainties, int index) =>
        index < uncertainties.Length && double.IsFinite(uncertainties[index]) ? uncertainties[index] : 0;

    /// <summary>Where the lines of each amplitude lie: those above 2 % of its strongest, and three widths beyond.</summary>
    private Interval?[] Extents()
    {
        var extent = new Interval?[_setup.Model.Amplitudes.Count];
        var strongest = new double[extent.Length];
        for (int l = 0; l < _lines.Count; l++)
        {
            strongest[_lines.Amplitude[l]] = Math.Max(strongest[_lines.Amplitude[l]], _lines.Intensity[l]);
        }

        double frequency = _input.Spectrum.FrequencyMHz;
        for (int l = 0; l < _lines.Count; l++)
        {
            int a = _lines.Amplitude[l];
            if (_lines.Intensity[l] < 0.02 * strongest[a])
            {
                continue;
            }

            double margin = 3 * Math.Exp(_state.Parameters[_lines.WidthParameter[l]]) / frequency;
            double ppm = _lines.Hertz[l] / frequency;
            extent[a] = extent[a] is { } known
                ? new Interval(Math.Min(known.Low, ppm - margin), Math.Max(known.High, ppm + margin))
                : new Interval(ppm - margin, ppm + margin);
        }

        return extent;
    }

    /// <summary>
    /// Amplitude scaled so that the model's area in the region equals the measured one: an imperfect pattern must not
    /// become a wrong integral.
    /// </summary>
    private double Corrected(int amplitude)
    {
        if (_extent[amplitude] is not { } region)
        {
            return 0;
        }

        (double measured, double modelled) = Areas(region);
        double ratio = modelled > 0 ? Math.Clamp(measured / modelled, 0.5, 2) : 1;
        return _state.Amplitudes[amplitude] * ratio;
    }

    private (double Measured, double Modelled) Areas(Interval region)
    {
        Spectrum spectrum = _input.Spectrum;
        (int first, int last) = IndexRange(region);
        double measured = 0;
        double modelled = 0;
        for (int i = first; i <= last; i++)
        {
            measured += spectrum.Intensity[i];
            modelled += Modelled[i];
        }

        return (measured * spectrum.HzPerPoint, modelled * spectrum.HzPerPoint);
    }

    private (int First, int Last) IndexRange(Interval region)
    {
        Spectrum spectrum = _input.Spectrum;
        return (
            Math.Clamp((int)Math.Ceiling(spectrum.IndexOf(region.High)), 0, spectrum.Count - 1),
            Math.Clamp((int)Math.Floor(spectrum.IndexOf(region.Low)), 0, spectrum.Count - 1));
    }

    /// <summary>Area per proton on which most of the non-exchangeable product agrees, and how well it agrees.</summary>
    private (double Area, double RelativeUncertainty) Scale()
    {
        var groups = new List<(double Value, double Weight)>();
        foreach (ProtonGroup group in _input.Product.Protons.Groups.Where(g => g.Lability == Lability.Fixed))
        {
            int amplitude = _setup.Product.AmplitudeOf[group.Index];
            double value = amplitude < 0 ? 0 : Corrected(amplitude);
            if (value > 0)
            {
                groups.Add((value, group.Count));
            }
        }

        if (groups.Count == 0)
        {
            return (0, 1);
        }

        groups.Sort((a, b) => a.Value.CompareTo(b.Value));
        double half = 0.5 * groups.Sum(g => g.Weight);
        double cumulative = 0;
        double median = groups[^1].Value;
        foreach ((double value, double weight) in groups)
        {
            cumulative += weight;
            if (cumulative >= half)
            {
                median = value;
                break;
            }
        }

        (double Value, double Weight)[] close = [.. groups.Where(g => Math.Abs(g.Value - median) < 0.3 * median)];
        double total = close.Sum(g => g.Weight);
        double mean = close.Sum(g => g.Weight * g.Value) / total;
        double variance = close.Sum(g => g.Weight * Math.Pow(g.Value - mean, 2)) / total;
        return (mean, Math.Sqrt(variance / Math.Max(1, close.Length - 1)) / mean);
    }

    /// <summary>Share of the measured signal in a region that the model does not draw, at twice the line width, noise taken off.</summary>
    private double PatternMisfit(Interval region)
    {
        Spectrum spectrum = _input.Spectrum;
        (int first, int last) = IndexRange(region);
        int reach = Math.Max(1, (int)Math.Round(WidthHertz / spectrum.HzPerPoint));
        double difference = 0;
        double signal = 0;
        double noise = 0;
        for (int i = first; i <= last; i += reach)
        {
            double r = 0;
            double y = 0;
            for (int k = i; k < Math.Min(i + reach, last + 1); k++)
            {
                r += spectrum.Intensity[k] - Modelled[k];
                y += spectrum.Intensity[k];
            }

            difference += Math.Abs(r);
            signal += y;
            noise += 0.8 * spectrum.NoiseStandardDeviation * Math.Sqrt(reach * spectrum.NoiseCorrelationPoints);
        }

        return signal <= 0 ? 1 : Math.Clamp((difference - noise) / signal, 0, 1);
    }

    private ImmutableArray<CouplingFit> Couplings()
    {
        var couplings = ImmutableArray.CreateBuilder<CouplingFit>();
        foreach ((int number, int parameter) in _setup.Product.CouplingOf)
        {
            double prior = _setup.Model.Parameters[parameter].PriorStandardUncertainty;
            double u = Known(_state.ParameterUncertainties, parameter);
            couplings.Add(new CouplingFit(number, _state.Parameters[parameter], u, u > 0 && u < 0.5 * prior));
        }

        return couplings.ToImmutable();
    }

    private IEnumerable<OtherFit> Others()
    {
        foreach (KnownColumns known in _setup.Known)
        {
            double area = Area(known.Amplitude);
            double u = Known(_state.AmplitudeUncertainties, known.Amplitude) * (area / Math.Max(_state.Amplitudes[known.Amplitude], 1e-300));
            if (area > 3 * u && area > 0 && (known.Substance.Role != "impurity" || IsBackedByMeasurement(known, area)))
            {
                yield return new OtherFit(
                    known.Substance.Name,
                    known.Substance.Role,
                    [.. known.Substance.Signals.Select((signal, s) => SignalRegion(signal, known, s))],
                    area,
                    u,
                    known.Substance.Signals.Sum(s => s.Protons));
            }
        }

        if (_setup.InternalStandard is { } standard && _input.InternalStandard is { } expectation)
        {
            int[] drawn = [.. standard.AmplitudeOf.Where(a => a >= 0)];
            if (drawn.Length > 0)
            {
                double area = drawn.Sum(a => Corrected(a) * expectation.Protons.Groups[Array.IndexOf(standard.AmplitudeOf, a)].Count);
                double protons = drawn.Sum(a => (double)expectation.Protons.Groups[Array.IndexOf(standard.AmplitudeOf, a)].Count);
                double u = Math.Sqrt(drawn.Sum(a => Math.Pow(Known(_state.AmplitudeUncertainties, a) * expectation.Protons.Groups[Array.IndexOf(standard.AmplitudeOf, a)].Count, 2)));
                yield return new OtherFit(
                    _input.InternalStandardName,
                    "internal standard",
                    [.. drawn.Select(a => _extent[a]).OfType<Interval>()],
                    area,
                    u,
                    protons);
            }
        }
    }

    /// <summary>An impurity cannot have more signal than was measured at its places; a fit that says so went astray there.</summary>
    private bool IsBackedByMeasurement(KnownColumns known, double area) =>
        area < 1.5 * known.Substance.Signals.Select((signal, s) => Areas(SignalRegion(signal, known, s)).Measured).Sum();

    private Interval SignalRegion(KnownSignal signal, KnownColumns known, int index)
    {
        double frequency = _input.Spectrum.FrequencyMHz;
        double centre = _state.Parameters[known.ShiftOf[index]] / frequency;
        double margin = 3 * Math.Exp(_state.Parameters[known.Width]) / frequency;
        return new Interval(
            centre + (signal.Lines.Min(l => l.OffsetHertz) / frequency) - margin,
            centre + (signal.Lines.Max(l => l.OffsetHertz) / frequency) + margin);
    }

    /// <summary>
    /// Laplace approximation: ln Z = −cost + Σ ln(posterior/prior width), less a stated cost for every expected group
    /// that has no signal at all (MacKay 1992, from memory). The data's part of the cost is taken over every signal of the
    /// spectrum, also those that this structure leaves undrawn, so that structures are compared on the same data; each
    /// signal counts up to a limit, since one gross misfit must not hide the rest.
    /// </summary>
    private double LogEvidence(double misfitShare)
    {
        double occam = 0;
        for (int p = 0; p < _state.ParameterUncertainties.Length; p++)
        {
            double u = _state.ParameterUncertainties[p];
            double prior = _setup.Model.Parameters[p].PriorStandardUncertainty;
            occam += double.IsFinite(u) && u > 0 ? Math.Min(0, Math.Log(u / prior)) : 0;
        }

        int absent = _input.Product.Protons.Groups.Count(g =>
            g.Lability == Lability.Fixed
            && _setup.Product.AmplitudeOf[g.Index] < 0
            && _input.Spectrum.WindowPpm.Contains(_input.Product.Shifts[g.Index].ShiftPpm));
        return -MisfitOfSignals(misfitShare) - (_state.Cost - _state.DataCost) + occam - (SpectrumFit.AbsentGroupCost * absent);
    }

    /// <summary>
    /// Half a sum of squares over all signals, each up to a limit that grows with its area up to half a proton. What noise alone
    /// adds, one half a point, is taken off before the limit: else a long signal would reach it however well it is drawn, and
    /// drawing it would count for nothing.
    /// </summary>
    private double MisfitOfSignals(double misfitShare)
    {
        Spectrum spectrum = _input.Spectrum;
        FitGrid whole = FitGrid.Lay(
            spectrum, spectrum.Intensity, [spectrum.WindowPpm], TypicalWidthHertz, spectrum.NoiseStandardDeviation, misfitShare);
        double areaPerProton = AreaOfExpectedProton();
        double sum = 0;
        foreach (MeasuredSignal signal in _signals)
        {
            (int first, int end) = whole.Between(signal.Ppm.Low * spectrum.FrequencyMHz, signal.Ppm.High * spectrum.FrequencyMHz);
            double misfit = 0;
            for (int i = first; i < end; i++)
            {
                int at = (int)Math.Round(spectrum.IndexOf(whole.Hertz[i] / spectrum.FrequencyMHz));
                double z = (whole.Intensity[i] - Modelled[at]) * whole.Weight[i];
                misfit += 0.5 * ((z * z) - 1);
            }

            sum += Math.Min(misfit, LargestSignalMisfit * Math.Clamp(2 * signal.Area / areaPerProton, 0, 1));
        }

        return sum;
    }

    /// <summary>
    /// At strong signals no line shape is right to the noise. The share of the signal that this model leaves undrawn, where
    /// it exceeds the usual one, is what shape faults amount to here; a structure that is wrong raises it too, which only
    /// ever makes structures harder to tell apart.
    /// </summary>
    private double MisfitShare()
    {
        if (_input.MisfitShare is { } given)
        {
            return given;
        }

        Spectrum spectrum = _input.Spectrum;
        double[] envelope = FitGrid.Envelope(spectrum.Intensity, Math.Max(5, 5 * TypicalWidthHertz) / spectrum.HzPerPoint);
        double left = 0;
        double signal = 0;
        foreach (MeasuredSignal region in _signals)
        {
            (int first, int last) = IndexRange(region.Ppm);
            for (int i = first; i <= last; i++)
            {
                double residual = spectrum.Intensity[i] - Modelled[i];
                left += (residual * residual) - (spectrum.NoiseStandardDeviation * spectrum.NoiseStandardDeviation);
                signal += envelope[i] * envelope[i];
            }
        }

        return signal <= 0 ? SpectrumFit.FineMisfitShare : Math.Clamp(Math.Sqrt(Math.Max(0, left) / signal), SpectrumFit.FineMisfitShare, LargestMisfitShare);
    }

    /// <summary>A scale that does not depend on the structure's assignment: all signal over all expected protons.</summary>
    private double AreaOfExpectedProton()
    {
        double protons = _input.Product.Protons.Groups.Where(g => g.Lability == Lability.Fixed).Sum(g => (double)g.Count);
        return Math.Max(1e-300, _signals.Sum(s => s.Area) / Math.Max(1, protons));
    }

    private double[] Render(IEnumerable<int> amplitudes)
    {
        Spectrum spectrum = _input.Spectrum;
        var wanted = amplitudes.ToHashSet();
        var curve = new double[spectrum.Count];
        double share = _state.Parameters[_setup.Model.ShareParameter];
        for (int l = 0; l < _lines.Count; l++)
        {
            double area = _state.Amplitudes[_lines.Amplitude[l]] * _lines.Intensity[l];
            if (area <= 0 || !wanted.Contains(_lines.Amplitude[l]))
            {
                continue;
            }

            var shape = new LineShape(Math.Exp(_state.Parameters[_lines.WidthParameter[l]]), share);
            double height = area * 2 / (Math.PI * shape.WidthHertz);
            double reach = Math.Clamp(
                0.5 * shape.WidthHertz * Math.Sqrt(height / (0.004 * spectrum.NoiseStandardDeviation)),
                6 * shape.WidthHertz,
                TailInWidths * shape.WidthHertz);
            double centre = spectrum.IndexOf(_lines.Hertz[l] / spectrum.FrequencyMHz);
            int first = Math.Max(0, (int)Math.Ceiling(centre - (reach / spectrum.HzPerPoint)));
            int last = Math.Min(spectrum.Count - 1, (int)Math.Floor(centre + (reach / spectrum.HzPerPoint)));
            for (int i = first; i <= last; i++)
            {
                curve[i] += area * shape.At((i - centre) * spectrum.HzPerPoint);
            }
        }

        return curve;
    }
}
