using BenchmarkDotNet.Running;

// Run with "-c Release -- --filter *Spin*"; without arguments it lists what there is.
BenchmarkSwitcher.FromAssembly(typeof(Program).Assembly).Run(args);
