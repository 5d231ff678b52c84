using BenchmarkDotNet.Running;
using Qc.Benchmarks;

// Run with "-c Release -- --filter *Spin*", or "-c Release -- audit"; without arguments it lists what there is.
if (args is ["audit"])
{
    await AuditRate.RunAsync();
    return;
}

BenchmarkSwitcher.FromAssembly(typeof(Program).Assembly).Run(args);
