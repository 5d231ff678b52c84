using BenchmarkDotNet.Attributes;
using Qc.Engine.Rivals;

namespace Qc.Benchmarks;

/// <summary>All isomers of a formula on one core. To hold: 100 000 alkanes a second, i.e. C16H34 (10 359) below 104 ms.</summary>
[MemoryDiagnoser]
public class IsomerBenchmarks
{
    [Params("C14H30", "C16H34", "C6H12O2", "C7H8O")]
    public string Formula { get; set; } = "";

    [Benchmark]
    public int Isomers() => IsomerGenerator.Isomers(IsomerFormula.Parse(Formula)!).Count();
}
