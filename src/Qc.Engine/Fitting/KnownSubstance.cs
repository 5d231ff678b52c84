using System.Collections.Immutable;

namespace Qc.Engine.Fitting;

/// <summary>One signal of a substance whose shifts in the solvent are known.</summary>
/// <param name="ShiftPpm">Position.</param>
/// <param name="TolerancePpm">Standard uncertainty of the position.</param>
/// <param name="Protons">Number of protons.</param>
/// <param name="Lines">Offset from the centre in Hz and intensity; intensities sum to <paramref name="Protons"/>.</param>
public sealed record KnownSignal(
    double ShiftPpm, double TolerancePpm, double Protons, ImmutableArray<(double OffsetHertz, double Intensity)> Lines);

/// <summary>A solvent, water, a reference or an impurity from the tables, in the solvent of the spectrum.</summary>
/// <param name="Name">Its name.</param>
/// <param name="Role">"solvent", "water", "reference" or "impurity".</param>
/// <param name="Signals">Its signals; exchangeable ones left out.</param>
public sealed record KnownSubstance(string Name, string Role, ImmutableArray<KnownSignal> Signals)
{
    /// <summary>Width at half height as seen in the spectrum, in Hz, where its line stands alone; else 0.</summary>
    public double WidthHertz { get; init; }
}
