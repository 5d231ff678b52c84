using BenchmarkDotNet.Running;
using Qc.Benchmarks;

// "report lines" and the like print statistics; anything else is for the benchmark runner, e.g. "--filter *Spin*".
if (args is ["report", var subject, .. var rest])
{
    return Reports.Print(subject, rest);
}

BenchmarkSwitcher.FromAssembly(typeof(Program).Assembly).Run(args);
return 0;
