namespace Qc.Engine.Values;

/// <summary>A value with its standard uncertainty (GUM, k = 1), both in the same unit.</summary>
/// <param name="Value">The estimate.</param>
/// <param name="StandardUncertainty">Standard uncertainty, zero or more.</param>
public readonly record struct Uncertain(double Value, double StandardUncertainty);
