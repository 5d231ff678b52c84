namespace Qc.Engine.Quantities;

/// <summary>Conformity of a value with limits, JCGM 106:2012, section 8.</summary>
public static class DecisionRule
{
    /// <summary>
    /// Whether a value is accepted: within limits drawn in by a guard band w = r·U. r = 0 is simple acceptance.
    /// </summary>
    /// <param name="value">The value.</param>
    /// <param name="expandedUncertainty">U, in the unit of the value.</param>
    /// <param name="low">Lower limit.</param>
    /// <param name="high">Upper limit.</param>
    /// <param name="guardBandMultiple">r, zero or more.</param>
    public static bool Accepts(double value, double expandedUncertainty, double low, double high, double guardBandMultiple)
    {
        double guard = guardBandMultiple * expandedUncertainty;
        return value >= low + guard && value <= high - guard;
    }
}
