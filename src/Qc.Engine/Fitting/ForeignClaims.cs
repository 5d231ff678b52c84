using System.Collections.Immutable;
using Qc.Engine.Processing;
using Qc.Engine.Prediction;
using Qc.Engine.Structures;

namespace Qc.Engine.Fitting;

/// <summary>Which signals solvent, water, reference and internal standard claim before the product is placed.</summary>
internal sealed class ForeignClaims
{
    private readonly double[] _area;
    private readonly double[] _uncertainty;
    private readonly double[] _unassignedCost;
    private readonly bool[] _wholly;
    private int _water = -1;

    private ForeignClaims(int signals)
    {
        _area = new double[signals];
        _uncertainty = new double[signals];
        _unassignedCost = new double[signals];
        Array.Fill(_unassignedCost, GroupAssignment.LargestUnassignedCost);
        _wholly = new bool[signals];
    }

    /// <summary>Known substances with a maximum where they are expected: part of the model from the start.</summary>
    public ImmutableArray<KnownSubstance> Present { get; private set; } = [];

    /// <summary>By group of the internal standard: its signal, -1 for none.</summary>
    public ImmutableArray<int> InternalStandardSignals { get; private set; } = [];

    /// <summary>Whether a known substance draws part of a signal.</summary>
    public bool IsDrawn(int signal) => _area[signal] > 0 || _wholly[signal] || _water == signal;

    /// <summary>Whether a signal belongs to something else altogether.</summary>
    public bool IsWholly(int signal) => _wholly[signal];

    /// <summary>Whether a signal lies where water does.</summary>
    public bool IsWater(int signal) => _water == signal;

    /// <summary>The signal as offered to the product's groups.</summary>
    public AssignableSignal Offer(MeasuredSignal signal, int index) =>
        new(signal, _area[index], _uncertainty[index], _unassignedCost[index]);

    /// <summary>Works out the claims.</summary>
    public static ForeignClaims Of(FitInput input, ImmutableArray<MeasuredSignal> signals)
    {
        var claims = new ForeignClaims(signals.Length);
        double frequency = input.Spectrum.FrequencyMHz;
        var present = new List<KnownSubstance>();
        foreach (KnownSubstance known in input.Known.Where(k => k.Role != "impurity"))
        {
            var found = ImmutableArray.CreateBuilder<KnownSignal>();
            double widthHertz = 0;
            foreach (KnownSignal expected in known.Signals)
            {
                if (claims.Claim(signals, known, expected, frequency) is { } place)
                {
                    found.Add(expected with { ShiftPpm = place.Ppm });
                    widthHertz = Math.Max(widthHertz, place.WidthHertz);
                }
            }

            if (found.Count > 0)
            {
                present.Add(known with { Signals = found.ToImmutable(), WidthHertz = widthHertz });
            }
        }

        claims.Present = [.. present];
        claims.ClaimInternalStandard(input, signals);
        claims.LetExchangeableClaim(input, signals);
        return claims;
    }

    /// <summary>Finds the maximum nearest to an expected place and books its area: where it is, and how wide where it stands alone; null where there is none.</summary>
    private (double Ppm, double WidthHertz)? Claim(ImmutableArray<MeasuredSignal> signals, KnownSubstance known, KnownSignal expected, double frequencyMHz)
    {
        double reachPpm = 3 * expected.TolerancePpm;
        double spanHertz = expected.Lines[0].OffsetHertz - expected.Lines[^1].OffsetHertz;
        int bestSignal = -1;
        Maximum best = default;
        for (int s = 0; s < signals.Length; s++)
        {
            foreach (Maximum maximum in signals[s].Maxima)
            {
                double distance = Math.Abs((maximum.Hertz / frequencyMHz) - expected.ShiftPpm);
                if (distance > reachPpm)
                {
                    continue;
                }

                double bestDistance = Math.Abs((best.Hertz / frequencyMHz) - expected.ShiftPpm);
                if (bestSignal < 0 || maximum.Height > 3 * best.Height || (distance < bestDistance && 3 * maximum.Height > best.Height))
                {
                    (bestSignal, best) = (s, maximum);
                }
            }
        }

        if (bestSignal < 0)
        {
            return null;
        }

        MeasuredSignal signal = signals[bestSignal];
        // Water is often broad, with noise on its top.
        bool alone = signal.StrongSpanHertz <= spanHertz + (known.Role == "water" ? 25 : 4);
        if (known.Role == "water")
        {
            // Water moves and overlaps: it may own a lone maximum but never takes one from the product.
            if (alone)
            {
                _unassignedCost[bestSignal] = GroupAssignment.OwnedElsewhereCost;
                _water = bestSignal;
            }

            return alone ? (best.Hertz / frequencyMHz, best.WidthHertz) : null;
        }

        double strongest = expected.Lines.Max(l => l.Intensity) / expected.Protons;
        double area = Math.Min(signal.Area, best.Height * Math.Max(best.WidthHertz, 0.3) * Math.PI / 2 / strongest);
        if (alone)
        {
            _wholly[bestSignal] = true;
            _unassignedCost[bestSignal] = GroupAssignment.OwnedElsewhereCost;
            area = signal.Area;
        }

        _area[bestSignal] += alone ? 0 : area;
        _uncertainty[bestSignal] += alone ? signal.Area : 0.6 * area;
        return (best.Hertz / frequencyMHz, alone && expected.Lines.Length == 1 ? best.WidthHertz : 0);
    }

    private void ClaimInternalStandard(FitInput input, ImmutableArray<MeasuredSignal> signals)
    {
        if (input.InternalStandard is not { } standard)
        {
            return;
        }

        var chosen = new List<int>();
        foreach (ProtonGroup group in standard.Protons.Groups)
        {
            ExpectedShift shift = standard.Shifts[group.Index];
            double rms = StartingPlaces.RmsHertz(standard, group.Index);
            int best = -1;
            double bestCost = 8;
            for (int s = 0; s < signals.Length && group.Lability == Lability.Fixed; s++)
            {
                double z = (signals[s].CentroidPpm - shift.ShiftPpm) / Math.Max(0.05, shift.StandardUncertaintyPpm);
                double width = (signals[s].RmsHertz - rms) / (1 + (0.3 * rms));
                double cost = (0.5 * z * z) + (0.5 * width * width) + (_wholly[s] ? 8 : 0);
                if (cost < bestCost)
                {
                    (best, bestCost) = (s, cost);
                }
            }

            chosen.Add(best);
            if (best >= 0)
            {
                _wholly[best] = true;
                _unassignedCost[best] = GroupAssignment.OwnedElsewhereCost;
                _uncertainty[best] += signals[best].Area;
            }
        }

        InternalStandardSignals = [.. chosen];
    }

    /// <summary>
    /// A signal of few lines may be an exchangeable proton's: the surer, the nearer it lies to that proton's expected place,
    /// which itself is known to a ppm or so only.
    /// </summary>
    private void LetExchangeableClaim(FitInput input, ImmutableArray<MeasuredSignal> signals)
    {
        foreach (ProtonGroup group in input.Product.Protons.Groups.Where(g => g.Lability == Lability.Exchangeable))
        {
            ExpectedShift shift = input.Product.Shifts[group.Index];
            for (int s = 0; s < signals.Length; s++)
            {
                double z = (signals[s].CentroidPpm - shift.ShiftPpm) / Math.Max(0.5, shift.StandardUncertaintyPpm);
                if (signals[s].StrongMaxima.Length <= 3)
                {
                    _unassignedCost[s] = Math.Min(_unassignedCost[s], GroupAssignment.OwnedElsewhereCost + (0.5 * z * z));
                }
            }
        }
    }
}
