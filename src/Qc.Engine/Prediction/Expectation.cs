using System.Collections.Immutable;
using Qc.Engine.Structures;

namespace Qc.Engine.Prediction;

/// <summary>What an expected shift rests on.</summary>
public enum Basis
{
    /// <summary>Published additive increments.</summary>
    Increments,

    /// <summary>The laboratory's own released assignments.</summary>
    Library,

    /// <summary>The product's reference lot.</summary>
    Reference,

    /// <summary>The tables do not cover the environment; the interval is the widest of its class.</summary>
    NotCovered,
}

/// <summary>The expected signal of one proton group.</summary>
/// <param name="Group">Index of the group.</param>
/// <param name="ShiftPpm">Expected shift.</param>
/// <param name="StandardUncertaintyPpm">Its standard uncertainty (k = 1).</param>
/// <param name="Basis">What it rests on.</param>
/// <param name="Rows">Ids of the table rows used, in order, e.g. "sp3/alpha/OCOR".</param>
public sealed record ExpectedShift(int Group, double ShiftPpm, double StandardUncertaintyPpm, Basis Basis, ImmutableArray<string> Rows);

/// <summary>An expected coupling between two proton sets.</summary>
/// <param name="SetA">Index of one set.</param>
/// <param name="SetB">Index of the other.</param>
/// <param name="Hertz">Coupling with sign.</param>
/// <param name="StandardUncertaintyHertz">Its standard uncertainty (k = 1).</param>
/// <param name="Bonds">Number of bonds between the protons: 2 to 5.</param>
/// <param name="Parameter">Couplings with the same number are one physical constant (J of A with X equals J of A' with X').</param>
/// <param name="Row">Id of the rule used.</param>
public sealed record ExpectedCoupling(
    int SetA, int SetB, double Hertz, double StandardUncertaintyHertz, int Bonds, int Parameter, string Row);

/// <summary>A coupling of a proton set to another magnetic nucleus (19F, 31P ...), which is itself not observed.</summary>
/// <param name="Set">Index of the proton set.</param>
/// <param name="Nucleus">The other nucleus, e.g. "19F".</param>
/// <param name="Atoms">Indices of the equivalent heteroatoms, all with this coupling.</param>
/// <param name="Hertz">Coupling with sign.</param>
/// <param name="StandardUncertaintyHertz">Its standard uncertainty.</param>
/// <param name="Parameter">Couplings with the same number are one physical constant.</param>
/// <param name="Row">Id of the rule used.</param>
public sealed record ExpectedHeteroCoupling(
    int Set, string Nucleus, ImmutableArray<int> Atoms, double Hertz, double StandardUncertaintyHertz, int Parameter, string Row);

/// <summary>Everything expected of a structure in a solvent.</summary>
/// <param name="Protons">Groups and sets.</param>
/// <param name="Shifts">One per group, same order.</param>
/// <param name="Couplings">Between sets; absent pairs do not couple.</param>
/// <param name="HeteroCouplings">To other magnetic nuclei.</param>
public sealed record Expectation(
    ProtonGroups Protons,
    ImmutableArray<ExpectedShift> Shifts,
    ImmutableArray<ExpectedCoupling> Couplings,
    ImmutableArray<ExpectedHeteroCoupling> HeteroCouplings);
