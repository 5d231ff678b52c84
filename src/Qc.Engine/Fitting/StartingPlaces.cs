using System.Collections.Immutable;
using Qc.Engine.Prediction;
using Qc.Engine.Processing;
using Qc.Engine.Structures;
using Qc.Engine.Values;

namespace Qc.Engine.Fitting;

/// <summary>Where each group of the product starts in the fit.</summary>
/// <param name="StartPpm">By group: starting shift.</param>
/// <param name="Placed">By group: whether signal was assigned to it.</param>
/// <param name="Measured">By group: whether its expected place lies in the window.</param>
/// <param name="AreaPerProton">Area of one proton by the assignment.</param>
/// <param name="Cost">Cost of the assignment.</param>
/// <param name="SignalOf">By group: index of the signal, -1 for none.</param>
internal sealed record StartingPlaces(
    double[] StartPpm, bool[] Placed, bool[] Measured, double AreaPerProton, double Cost, int[] SignalOf)
{
    /// <summary>An exchangeable proton is placed up to four standard uncertainties from where it is expected: hydrogen bonds move it that far.</summary>
    private const double LargestExchangeableCost = 8;

    /// <summary>What it costs to give an exchangeable proton the signal that lies where water does.</summary>
    private const double WaterCost = 4;

    /// <summary>Candidate starts, best first.</summary>
    public static ImmutableArray<StartingPlaces> Candidates(
        FitInput input, ImmutableArray<MeasuredSignal> signals, ForeignClaims claims, int wanted)
    {
        Interval window = input.Spectrum.WindowPpm;
        bool[] measured = [.. input.Product.Shifts.Select(shift => window.Contains(shift.ShiftPpm))];
        List<AssignableGroup> assignable = Assignable(input.Product, window);
        AssignableSignal[] offered = [.. signals.Select((signal, s) => claims.Offer(signal, s))];
        ImmutableArray<Assignment> assignments = GroupAssignment.Best(assignable, offered, wanted);
        if (assignments.IsEmpty)
        {
            assignments = [new Assignment([.. assignable.Select(_ => -1)], 0, 0)];
        }

        return [.. assignments.Select(a => Place(input, signals, claims, assignable, measured, a))];
    }

    /// <summary>The groups that must show in a window: those that do not exchange and are expected in it.</summary>
    internal static List<AssignableGroup> Assignable(Expectation product, Interval window) =>
    [
        .. product.Protons.Groups
            .Where(group => group.Lability == Lability.Fixed && window.Contains(product.Shifts[group.Index].ShiftPpm))
            .Select(group => new AssignableGroup(
                group.Index,
                group.Count,
                product.Shifts[group.Index].ShiftPpm,
                product.Shifts[group.Index].StandardUncertaintyPpm,
                RmsHertz(product, group.Index))),
    ];

    /// <summary>√(¼ Σ n J²): root mean square width of the group's multiplet in the weak limit.</summary>
    internal static double RmsHertz(Expectation expectation, int group)
    {
        double sum = 0;
        int sets = 0;
        foreach (ProtonSet set in expectation.Protons.Sets.Where(s => s.Group == group))
        {
            sets++;
            foreach (ExpectedCoupling coupling in expectation.Couplings.Where(c => c.SetA == set.Index || c.SetB == set.Index))
            {
                ProtonSet other = expectation.Protons.Sets[coupling.SetA == set.Index ? coupling.SetB : coupling.SetA];
                if (other.Group != group && expectation.Protons.Groups[other.Group].Lability == Lability.Fixed)
                {
                    sum += 0.25 * other.Count * coupling.Hertz * coupling.Hertz;
                }
            }

            foreach (ExpectedHeteroCoupling coupling in expectation.HeteroCouplings.Where(c => c.Set == set.Index))
            {
                sum += 0.25 * coupling.Atoms.Length * coupling.Hertz * coupling.Hertz;
            }
        }

        return Math.Sqrt(sum / Math.Max(1, sets));
    }

    private static StartingPlaces Place(
        FitInput input,
        ImmutableArray<MeasuredSignal> signals,
        ForeignClaims claims,
        List<AssignableGroup> assignable,
        bool[] measured,
        Assignment assignment)
    {
        Expectation product = input.Product;
        int count = product.Protons.Groups.Length;
        var start = new double[count];
        var placed = new bool[count];
        var signalOf = new int[count];
        Array.Fill(signalOf, -1);
        for (int g = 0; g < count; g++)
        {
            start[g] = product.Shifts[g].ShiftPpm;
        }

        foreach (IGrouping<int, int> shared in Enumerable.Range(0, assignable.Count)
            .Where(i => assignment.SignalOf[i] >= 0)
            .GroupBy(i => assignment.SignalOf[i]))
        {
            AssignableGroup[] occupants =
                [.. shared.Select(i => assignable[i]).OrderByDescending(g => g.ShiftPpm).ThenBy(g => g.Group)];
            double[] centres = SliceCentres(input.Spectrum, signals[shared.Key], [.. occupants.Select(o => (double)o.Count)]);
            for (int k = 0; k < occupants.Length; k++)
            {
                start[occupants[k].Group] = centres[k];
                placed[occupants[k].Group] = true;
                signalOf[occupants[k].Group] = shared.Key;
            }
        }

        double areaPerProton = ScaleOf(signals, claims, assignable, assignment);
        PlaceExchangeable(product, signals, claims, areaPerProton, start, placed, signalOf);
        return new StartingPlaces(start, placed, measured, areaPerProton, assignment.Cost, signalOf);
    }

    /// <summary>Area of one proton over the signals that the assignment uses; the assignment's own scale is coarse.</summary>
    private static double ScaleOf(
        ImmutableArray<MeasuredSignal> signals, ForeignClaims claims, List<AssignableGroup> assignable, Assignment assignment)
    {
        int[] placed = [.. Enumerable.Range(0, assignable.Count).Where(i => assignment.SignalOf[i] >= 0)];
        double area = placed.Select(i => assignment.SignalOf[i]).Distinct().Sum(s => claims.Offer(signals[s], s).Area);
        double protons = placed.Sum(i => (double)assignable[i].Count);
        return protons > 0 && area > 0 ? area / protons : assignment.AreaPerProton;
    }

    /// <summary>Centres of gravity of consecutive slices of a signal whose areas are as the weights, from high to low ppm.</summary>
    private static double[] SliceCentres(Spectrum spectrum, MeasuredSignal signal, double[] weights)
    {
        if (weights.Length == 1)
        {
            return [signal.CentroidPpm];
        }

        int first = (int)Math.Ceiling(spectrum.IndexOf(signal.Ppm.High));
        int last = (int)Math.Floor(spectrum.IndexOf(signal.Ppm.Low));
        double floor = 3 * spectrum.NoiseStandardDeviation;
        double total = 0;
        for (int i = first; i <= last; i++)
        {
            total += spectrum.Intensity[i] > floor ? spectrum.Intensity[i] : 0;
        }

        double all = weights.Sum();
        var centres = new double[weights.Length];
        int slice = 0;
        double until = total * weights[0] / all;
        double cumulative = 0;
        double moment = 0;
        double area = 0;
        for (int i = first; i <= last; i++)
        {
            double y = spectrum.Intensity[i] > floor ? spectrum.Intensity[i] : 0;
            cumulative += y;
            moment += y * i;
            area += y;
            if (cumulative >= until || i == last)
            {
                centres[slice] = area > 0 ? spectrum.Ppm(moment / area) : signal.CentroidPpm;
                if (slice == weights.Length - 1)
                {
                    break;
                }

                slice++;
                until += total * weights[slice] / all;
                moment = 0;
                area = 0;
            }
        }

        for (int k = slice + 1; k < centres.Length; k++)
        {
            centres[k] = centres[slice];
        }

        return centres;
    }

    /// <summary>Exchangeable groups take what nobody else claims, where its area is not too large for them; never the reverse.</summary>
    private static void PlaceExchangeable(
        Expectation product,
        ImmutableArray<MeasuredSignal> signals,
        ForeignClaims claims,
        double areaPerProton,
        double[] start,
        bool[] placed,
        int[] signalOf)
    {
        var taken = new HashSet<int>(signalOf.Where(s => s >= 0));
        for (int s = 0; s < signals.Length; s++)
        {
            if (claims.IsWholly(s))
            {
                taken.Add(s);
            }
        }

        foreach (ProtonGroup group in product.Protons.Groups.Where(g => g.Lability == Lability.Exchangeable))
        {
            ExpectedShift shift = product.Shifts[group.Index];
            int best = -1;
            double bestCost = LargestExchangeableCost;
            for (int s = 0; s < signals.Length; s++)
            {
                double protons = areaPerProton > 0 ? signals[s].Area / areaPerProton : 0;
                if (taken.Contains(s) || protons < 0.25 * group.Count || protons > 1.5 * group.Count)
                {
                    continue;
                }

                double z = (signals[s].CentroidPpm - shift.ShiftPpm) / Math.Max(0.5, shift.StandardUncertaintyPpm);
                double area = (protons - group.Count) / (0.3 * group.Count);
                double cost = (0.5 * z * z) + (0.5 * area * area) + (claims.IsWater(s) ? WaterCost : 0);
                if (cost < bestCost)
                {
                    (best, bestCost) = (s, cost);
                }
            }

            if (best >= 0)
            {
                taken.Add(best);
                start[group.Index] = signals[best].CentroidPpm;
                placed[group.Index] = true;
                signalOf[group.Index] = best;
            }
        }
    }
}
