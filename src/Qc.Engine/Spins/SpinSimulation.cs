namespace Qc.Engine.Spins;

/// <summary>The spectrum of a spin system, once. For many evaluations of one system use <see cref="CompiledSpinSystem"/>.</summary>
public static class SpinSimulation
{
    /// <summary>The lines of a system, ordered by frequency; intensities sum to the number of observed spins.</summary>
    /// <param name="system">Sites and couplings.</param>
    /// <param name="options">Limits; the defaults if null.</param>
    public static Transition[] Simulate(SpinSystem system, SimulationOptions? options = null)
    {
        ArgumentNullException.ThrowIfNull(system);
        SpinSystem joined = system with { Couplings = system.Couplings.RemoveAll(c => c.Hertz == 0) };
        return CompiledSpinSystem.Compile(joined, options).Evaluate(Frequencies(joined), Couplings(joined));
    }

    /// <summary>The same lines with the derivatives of their frequencies by every site and every listed coupling.</summary>
    /// <param name="system">Sites and couplings.</param>
    /// <param name="options">Limits; the defaults if null.</param>
    public static LineGradients SimulateWithGradient(SpinSystem system, SimulationOptions? options = null)
    {
        ArgumentNullException.ThrowIfNull(system);
        return CompiledSpinSystem.Compile(system, options).EvaluateWithGradient(Frequencies(system), Couplings(system));
    }

    private static double[] Frequencies(SpinSystem system) => [.. system.Sites.Select(s => s.FrequencyHertz)];

    private static double[] Couplings(SpinSystem system) => [.. system.Couplings.Select(c => c.Hertz)];
}
