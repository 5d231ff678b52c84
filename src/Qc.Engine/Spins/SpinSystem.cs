using System.Collections.Immutable;

namespace Qc.Engine.Spins;

/// <summary>
/// Magnetically equivalent spins-½ with one resonance frequency.
/// </summary>
/// <param name="FrequencyHertz">Resonance frequency in Hz, on any common origin.</param>
/// <param name="Count">Number of equivalent spins, 1 or more.</param>
/// <param name="Observed">False for another nucleus (19F, 31P): it splits, but its own lines are left out, and its coupling to observed spins is treated as weak.</param>
public sealed record SpinSite(double FrequencyHertz, int Count, bool Observed = true);

/// <summary>A scalar coupling between two sites.</summary>
/// <param name="SiteA">Index of one site.</param>
/// <param name="SiteB">Index of the other.</param>
/// <param name="Hertz">Coupling with sign.</param>
public sealed record SpinCoupling(int SiteA, int SiteB, double Hertz);

/// <summary>Sites and the couplings between them: H = Σ νᵢ I_z,i + Σ Jᵢⱼ Iᵢ·Iⱼ, in Hz.</summary>
/// <param name="Sites">The sites.</param>
/// <param name="Couplings">Couplings; pairs left out do not couple.</param>
public sealed record SpinSystem(ImmutableArray<SpinSite> Sites, ImmutableArray<SpinCoupling> Couplings);

/// <summary>One line of a simulated spectrum.</summary>
/// <param name="FrequencyHertz">Position, on the origin of the system.</param>
/// <param name="Intensity">Intensity; over a system they sum to its number of observed spins.</param>
/// <param name="Site">Site that contributes most to the line.</param>
public readonly record struct Transition(double FrequencyHertz, double Intensity, int Site);
