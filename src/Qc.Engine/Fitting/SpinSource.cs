using System.Collections.Immutable;
using Qc.Engine.Prediction;
using Qc.Engine.Spins;
using Qc.Engine.Structures;

namespace Qc.Engine.Fitting;

/// <summary>
/// The lines of a substance from its spin systems. Frequencies come from one parameter per proton group, couplings from
/// one per physical constant; what has no parameter keeps its expected value.
/// </summary>
internal sealed class SpinSource : ILineSource
{
    private static readonly SimulationOptions Options = new()
    {
        LargestExactBlock = 130,
        LargestNeighbourhoodBlock = 40,
        MergeHertz = 0.03,
        DroppedLine = 1e-4,
        DroppedInAll = 2e-3,
    };

    private readonly CompiledSpinSystem _compiled;
    private readonly double[] _expectedHertz;
    private readonly double[] _expectedCouplingHertz;
    private readonly int[] _groupOfSite;
    private readonly int[] _shiftParameterOfSite;
    private readonly int[] _parameterOfCoupling;
    private readonly IReadOnlyList<int> _amplitudeOf;
    private readonly IReadOnlyList<int> _widthParameterOf;

    /// <param name="expectation">The substance.</param>
    /// <param name="frequencyMHz">Field as frequency of 0 ppm.</param>
    /// <param name="shiftParameterOf">By group: parameter of its shift in Hz, or -1.</param>
    /// <param name="couplingParameterOf">Parameter of a coupling constant between protons by its number, where fitted.</param>
    /// <param name="heteroCouplingParameterOf">Parameter of a coupling constant to another nucleus by its number, where fitted.</param>
    /// <param name="amplitudeOf">By group: amplitude, or -1 where its lines are not drawn.</param>
    /// <param name="widthParameterOf">By group: parameter of ln(width).</param>
    public SpinSource(
        Expectation expectation,
        double frequencyMHz,
        IReadOnlyList<int> shiftParameterOf,
        IReadOnlyDictionary<int, int> couplingParameterOf,
        IReadOnlyDictionary<int, int> heteroCouplingParameterOf,
        IReadOnlyList<int> amplitudeOf,
        IReadOnlyList<int> widthParameterOf)
    {
        _amplitudeOf = amplitudeOf;
        _widthParameterOf = widthParameterOf;
        ImmutableArray<ProtonSet> sets = expectation.Protons.Sets;
        var sites = new List<SpinSite>();
        var groupOfSite = new List<int>();
        foreach (ProtonSet set in sets)
        {
            sites.Add(new SpinSite(expectation.Shifts[set.Group].ShiftPpm * frequencyMHz, set.Count));
            groupOfSite.Add(set.Group);
        }

        var couplings = new List<SpinCoupling>();
        var parameterOfCoupling = new List<int>();
        foreach (ExpectedCoupling coupling in expectation.Couplings.Where(c => Takes(expectation, c)))
        {
            couplings.Add(new SpinCoupling(coupling.SetA, coupling.SetB, coupling.Hertz));
            parameterOfCoupling.Add(couplingParameterOf.GetValueOrDefault(coupling.Parameter, -1));
        }

        var heteroSites = new Dictionary<string, int>(StringComparer.Ordinal);
        foreach (ExpectedHeteroCoupling coupling in expectation.HeteroCouplings)
        {
            string key = coupling.Nucleus + string.Join(',', coupling.Atoms);
            if (!heteroSites.TryGetValue(key, out int site))
            {
                site = sites.Count;
                heteroSites[key] = site;
                sites.Add(new SpinSite(0, coupling.Atoms.Length, Observed: false));
                groupOfSite.Add(-1);
            }

            couplings.Add(new SpinCoupling(coupling.Set, site, coupling.Hertz));
            parameterOfCoupling.Add(heteroCouplingParameterOf.GetValueOrDefault(coupling.Parameter, -1));
        }

        _compiled = CompiledSpinSystem.Compile(new SpinSystem([.. sites], [.. couplings]), Options);
        _expectedHertz = [.. sites.Select(s => s.FrequencyHertz)];
        _expectedCouplingHertz = [.. couplings.Select(c => c.Hertz)];
        _groupOfSite = [.. groupOfSite];
        _shiftParameterOfSite = [.. groupOfSite.Select(g => g < 0 ? -1 : shiftParameterOf[g])];
        _parameterOfCoupling = [.. parameterOfCoupling];
    }

    /// <inheritdoc/>
    public void Emit(double[] parameters, LineSheet sheet)
    {
        var hertz = (double[])_expectedHertz.Clone();
        for (int i = 0; i < hertz.Length; i++)
        {
            hertz[i] = _shiftParameterOfSite[i] >= 0 ? parameters[_shiftParameterOfSite[i]] : hertz[i];
        }

        var couplings = (double[])_expectedCouplingHertz.Clone();
        for (int i = 0; i < couplings.Length; i++)
        {
            couplings[i] = _parameterOfCoupling[i] >= 0 ? parameters[_parameterOfCoupling[i]] : couplings[i];
        }

        LineGradients result = _compiled.EvaluateWithGradient(hertz, couplings);
        var byParameter = new SortedDictionary<int, double>();
        for (int l = 0; l < result.Lines.Length; l++)
        {
            Transition line = result.Lines[l];
            int group = _groupOfSite[line.Site];
            if (group < 0 || _amplitudeOf[group] < 0)
            {
                continue;
            }

            byParameter.Clear();
            Collect(result.SitesOf(l), _shiftParameterOfSite, byParameter);
            Collect(result.CouplingsOf(l), _parameterOfCoupling, byParameter);
            sheet.Add(_amplitudeOf[group], line.FrequencyHertz, line.Intensity, _widthParameterOf[group]);
            foreach ((int parameter, double derivative) in byParameter)
            {
                sheet.AddGradient(parameter, derivative);
            }
        }
    }

    private static void Collect(ReadOnlySpan<double> derivatives, int[] parameterOf, SortedDictionary<int, double> byParameter)
    {
        for (int i = 0; i < derivatives.Length; i++)
        {
            if (derivatives[i] != 0 && parameterOf[i] >= 0)
            {
                byParameter[parameterOf[i]] = byParameter.GetValueOrDefault(parameterOf[i]) + derivatives[i];
            }
        }
    }

    /// <summary>A coupling to an exchangeable proton counts only where that proton's signal was found (slow exchange).</summary>
    private bool Takes(Expectation expectation, ExpectedCoupling coupling)
    {
        bool Present(int set)
        {
            ProtonGroup group = expectation.Protons.Groups[expectation.Protons.Sets[set].Group];
            return group.Lability == Lability.Fixed || _amplitudeOf[group.Index] >= 0;
        }

        return Present(coupling.SetA) && Present(coupling.SetB);
    }
}
