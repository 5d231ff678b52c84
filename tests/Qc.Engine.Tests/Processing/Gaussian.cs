namespace Qc.Engine.Tests.Processing;

/// <summary>Normal deviates from a seed (Box and Muller 1958), the same on every run.</summary>
internal sealed class Gaussian(int seed)
{
    private readonly Random uniform = new(seed);

    public double Next() => Math.Sqrt(-2 * Math.Log(1 - uniform.NextDouble())) * Math.Cos(2 * Math.PI * uniform.NextDouble());
}
