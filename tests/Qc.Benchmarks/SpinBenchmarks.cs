using System.Globalization;
using BenchmarkDotNet.Attributes;
using Qc.Engine.Spins;
using Qc.Engine.Tests.Spins;

namespace Qc.Benchmarks;

/// <summary>
/// One evaluation of a compiled spin system. To hold: A3B2C2 below 1 ms, 10 distinct spins below 100 ms, 12 below 3 s,
/// a chain of 30 protons well below 1 s.
/// </summary>
[MemoryDiagnoser]
public class SpinBenchmarks
{
    private SpinSystem _system = new([], []);
    private CompiledSpinSystem _compiled = CompiledSpinSystem.Compile(new SpinSystem([], []));
    private double[] _frequencies = [];
    private double[] _couplings = [];

    [Params("A3B2C2", "8 distinct", "10 distinct", "12 distinct", "30 in a chain")]
    public string System { get; set; } = "";

    [GlobalSetup]
    public void Prepare()
    {
        _system = System switch
        {
            "A3B2C2" => Systems.Random(1, [3, 2, 2], 400, 14),
            "30 in a chain" => Systems.Chain(4, 15, 3000),
            _ => Systems.Random(2, [.. Enumerable.Repeat(1, int.Parse(System.Split(' ')[0], CultureInfo.InvariantCulture))], 200, 15),
        };
        _compiled = CompiledSpinSystem.Compile(_system);
        _frequencies = [.. _system.Sites.Select(s => s.FrequencyHertz)];
        _couplings = [.. _system.Couplings.Select(c => c.Hertz)];
    }

    [Benchmark]
    public Transition[] Lines() => _compiled.Evaluate(_frequencies, _couplings);

    [Benchmark]
    public LineGradients LinesWithGradient() => _compiled.EvaluateWithGradient(_frequencies, _couplings);
}

/// <summary>The same by the dense matrix of all product states, for comparison; 10 spins and more take minutes.</summary>
public class DenseTwinBenchmarks
{
    private SpinSystem _system = new([], []);

    [Params("A3B2C2", "8 distinct")]
    public string System { get; set; } = "";

    [GlobalSetup]
    public void Prepare() => _system = System == "A3B2C2"
        ? Systems.Random(1, [3, 2, 2], 400, 14)
        : Systems.Random(2, [.. Enumerable.Repeat(1, 8)], 200, 15);

    [Benchmark]
    public List<(double Frequency, double Intensity)> Lines() => DenseTwin.Lines(_system);
}
