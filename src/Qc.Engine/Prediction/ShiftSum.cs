using System.Collections.Immutable;
using Qc.Engine.Prediction.Environments;

namespace Qc.Engine.Prediction;

/// <summary>A base value to which increments are added one by one; variances add, borrowed rows count more.</summary>
internal sealed class ShiftSum
{
    private readonly ImmutableArray<string>.Builder _rows = ImmutableArray.CreateBuilder<string>();

    /// <summary>Starts from a base or parent.</summary>
    public ShiftSum(Fact parent)
    {
        ShiftPpm = parent.Value;
        Variance = parent.StandardUncertainty * parent.StandardUncertainty;
        _rows.Add(parent.Id);
    }

    /// <summary>The sum so far.</summary>
    public double ShiftPpm { get; private set; }

    /// <summary>Its variance in ppm².</summary>
    public double Variance { get; private set; }

    /// <summary>Adds an increment.</summary>
    public void Add(Fact increment, bool isBorrowed, double extraUncertaintyPpm = 0)
    {
        ShiftPpm += increment.Value;
        AddUncertainty(increment.StandardUncertainty);
        AddUncertainty(extraUncertaintyPpm);
        AddUncertainty(isBorrowed ? UncertaintyModel.BorrowedPpm : 0);
        _rows.Add(increment.Id);
    }

    /// <summary>Widens the estimate.</summary>
    public void AddUncertainty(double standardUncertaintyPpm) => Variance += standardUncertaintyPpm * standardUncertaintyPpm;

    /// <summary>The estimate, with the rows it rests on.</summary>
    public ShiftEstimate ToEstimate() => new(ShiftPpm, Math.Sqrt(Variance), _rows.ToImmutable());
}
