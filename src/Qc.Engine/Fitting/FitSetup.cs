using System.Collections.Immutable;
using Qc.Engine.Processing;
using Qc.Engine.Prediction;
using Qc.Engine.Structures;

namespace Qc.Engine.Fitting;

/// <summary>The model of one start: which parameter and which amplitude belongs to what.</summary>
internal sealed class FitSetup
{
    /// <summary>
    /// Methyls integrate 15 to 40 % high after short delays, so protons of one molecule are tied loosely.
    /// </summary>
    private const double TieShare = 0.25;

    private FitSetup(FitModel model, SubstanceColumns product, SubstanceColumns? standard, ImmutableArray<KnownColumns> known)
    {
        Model = model;
        Product = product;
        InternalStandard = standard;
        Known = known;
    }

    public FitModel Model { get; }

    /// <summary>Whether a parameter is the place of a group or of a known signal.</summary>
    public bool IsPlace(int parameter) => Model.Parameters[parameter].Name.StartsWith("shift", StringComparison.Ordinal);

    public SubstanceColumns Product { get; }

    public SubstanceColumns? InternalStandard { get; }

    public ImmutableArray<KnownColumns> Known { get; private set; }

    /// <summary>Builds the model for a start.</summary>
    public static FitSetup Build(
        FitInput input,
        ImmutableArray<MeasuredSignal> signals,
        ForeignClaims claims,
        StartingPlaces places,
        double widthHertz)
    {
        FitModel model = FitModel.WithLineShape(widthHertz, 0.1);
        double frequency = input.Spectrum.FrequencyMHz;
        SubstanceColumns product = AddSubstance(
            model, input.Product, frequency, places.StartPpm, places.Placed, g => OwnWidth(input.Product, signals, places, g), 0);
        SubstanceColumns? standard = null;
        if (input.InternalStandard is { } expectation && !claims.InternalStandardSignals.IsEmpty)
        {
            double[] start = [.. claims.InternalStandardSignals.Select((s, g) => s >= 0 ? signals[s].CentroidPpm : expectation.Shifts[g].ShiftPpm)];
            bool[] placed = [.. claims.InternalStandardSignals.Select(s => s >= 0)];
            standard = AddSubstance(model, expectation, frequency, start, placed, _ => 0, 1);
        }

        var setup = new FitSetup(model, product, standard, []);
        // Water moves; a signal that the product takes in this start is not water's.
        bool waterIsTaken = places.SignalOf.Any(s => s >= 0 && claims.IsWater(s));
        setup.AddKnown([.. claims.Present.Where(k => k.Role != "water" || !waterIsTaken)], frequency);
        return setup;
    }

    /// <summary>Adds solvents, water or impurities to the model; returns their columns.</summary>
    public ImmutableArray<KnownColumns> AddKnown(IReadOnlyList<KnownSubstance> substances, double frequencyMHz)
    {
        var added = ImmutableArray.CreateBuilder<KnownColumns>();
        foreach (KnownSubstance substance in substances)
        {
            int amplitude = Model.Add(new FitAmplitude(substance.Name, -1, 1));
            var shifts = ImmutableArray.CreateBuilder<int>();
            int width = Model.WidthParameter;
            if (substance.Role is "water" or "solvent" or "reference")
            {
                double ln = Math.Max(Model.Parameters[width].Start, Math.Log(Math.Max(substance.WidthHertz, 1e-3)));
                width = Model.Add(new FitParameter($"ln width {substance.Name}", ln, ln, 1, ln - 2, ln + 3.5, 0.5));
            }

            foreach (KnownSignal signal in substance.Signals)
            {
                double hertz = signal.ShiftPpm * frequencyMHz;
                double reach = substance.Role == "impurity" ? Math.Max(2, 0.006 * frequencyMHz) : Math.Max(4, 0.03 * frequencyMHz);
                int shift = Model.Add(new FitParameter(
                    $"shift {substance.Name}", hertz, hertz, Math.Max(2, 0.01 * frequencyMHz), hertz - reach, hertz + reach, 4));
                shifts.Add(shift);
                Model.Sources.Add(new FixedPatternSource(amplitude, shift, width, signal.Lines));
            }

            added.Add(new KnownColumns(substance, amplitude, shifts.ToImmutable(), width));
        }

        ImmutableArray<KnownColumns> columns = added.ToImmutable();
        Known = Known.AddRange(columns);
        return columns;
    }

    private static SubstanceColumns AddSubstance(
        FitModel model, Expectation expectation, double frequencyMHz, double[] startPpm, bool[] placed, Func<int, double> ownWidthHertz, int tie)
    {
        int groups = expectation.Protons.Groups.Length;
        var shiftOf = new int[groups];
        var amplitudeOf = new int[groups];
        var widthOf = new int[groups];
        for (int g = 0; g < groups; g++)
        {
            ProtonGroup group = expectation.Protons.Groups[g];
            shiftOf[g] = -1;
            amplitudeOf[g] = -1;
            widthOf[g] = model.WidthParameter;
            if (!placed[g])
            {
                continue;
            }

            bool exchangeable = group.Lability == Lability.Exchangeable;
            double hertz = startPpm[g] * frequencyMHz;
            double expected = expectation.Shifts[g].ShiftPpm * frequencyMHz;
            double uncertainty = expectation.Shifts[g].StandardUncertaintyPpm * frequencyMHz;
            shiftOf[g] = model.Add(new FitParameter(
                $"shift {group.Name}", hertz, expected, Math.Max(2, uncertainty), hertz - 80, hertz + 80, 6));
            amplitudeOf[g] = model.Add(new FitAmplitude(group.Name, exchangeable ? -1 : tie, TieShare));
            double own = ownWidthHertz(g);
            if (own > 0)
            {
                double ln = Math.Log(own);
                widthOf[g] = model.Add(new FitParameter($"ln width {group.Name}", ln, ln, 1, ln - 2.5, ln + 2, 0.5));
            }
        }

        var couplingOf = new SortedDictionary<int, int>();
        foreach (ExpectedCoupling coupling in expectation.Couplings)
        {
            bool drawn = amplitudeOf[expectation.Protons.Sets[coupling.SetA].Group] >= 0
                || amplitudeOf[expectation.Protons.Sets[coupling.SetB].Group] >= 0;
            if (drawn && !couplingOf.ContainsKey(coupling.Parameter))
            {
                couplingOf[coupling.Parameter] = AddCoupling(model, coupling.Parameter, coupling.Hertz, coupling.StandardUncertaintyHertz);
            }
        }

        // The two kinds of couplings are numbered apart.
        var heteroCouplingOf = new SortedDictionary<int, int>();
        foreach (ExpectedHeteroCoupling coupling in expectation.HeteroCouplings)
        {
            if (amplitudeOf[expectation.Protons.Sets[coupling.Set].Group] >= 0 && !heteroCouplingOf.ContainsKey(coupling.Parameter))
            {
                heteroCouplingOf[coupling.Parameter] = AddCoupling(model, coupling.Parameter, coupling.Hertz, coupling.StandardUncertaintyHertz);
            }
        }

        model.Sources.Add(new SpinSource(expectation, frequencyMHz, shiftOf, couplingOf, heteroCouplingOf, amplitudeOf, widthOf));
        return new SubstanceColumns(shiftOf, amplitudeOf, widthOf, couplingOf, tie);
    }

    private static int AddCoupling(FitModel model, int number, double hertz, double uncertainty)
    {
        double u = Math.Max(0.2, uncertainty);
        double reach = Math.Max(3, 4 * u);
        return model.Add(new FitParameter($"J {number}", hertz, hertz, u, hertz - reach, hertz + reach, 0.8));
    }

    private static double OwnWidth(Expectation expectation, ImmutableArray<MeasuredSignal> signals, StartingPlaces places, int group)
    {
        if (expectation.Protons.Groups[group].Lability == Lability.Fixed || places.SignalOf[group] < 0)
        {
            return 0;
        }

        MeasuredSignal signal = signals[places.SignalOf[group]];
        return Math.Max(1, signal.Maxima.Max(m => m.WidthHertz) + signal.SpanHertz);
    }
}

/// <summary>Parameters and amplitudes of a substance with spin systems, by group.</summary>
/// <param name="ShiftOf">Parameter of the shift, -1 for none.</param>
/// <param name="AmplitudeOf">Amplitude, -1 for none.</param>
/// <param name="WidthOf">Parameter of ln(width).</param>
/// <param name="CouplingOf">Parameter of each coupling constant by its number.</param>
/// <param name="Tie">Its tie.</param>
internal sealed record SubstanceColumns(
    int[] ShiftOf, int[] AmplitudeOf, int[] WidthOf, SortedDictionary<int, int> CouplingOf, int Tie);

/// <summary>Parameters and amplitude of a substance with known lines.</summary>
internal sealed record KnownColumns(KnownSubstance Substance, int Amplitude, ImmutableArray<int> ShiftOf, int Width);
