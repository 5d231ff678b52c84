using Qc.Chemistry.Toolkit;
using Xunit;

namespace Qc.Chemistry.Tests;

public sealed class ScriptedToolkitTests
{
    [Fact]
    public void A_call_that_runs_on_is_stopped_and_the_next_finds_a_fresh_toolkit()
    {
        using var toolkit = new ScriptedToolkit(TimeSpan.FromSeconds(2));

        ToolkitFailedException failure = Assert.Throws<ToolkitFailedException>(() => toolkit.Call("eval", "while (true) { }"));
        Assert.Contains("longer than 2 s", failure.Message, StringComparison.Ordinal);
        Assert.Equal("CCO", toolkit.Call("qcCanonical", "OCC").Smiles);
    }

    [Fact]
    public async Task The_time_limit_holds_while_the_thread_pool_is_full()
    {
        using var toolkit = new ScriptedToolkit(TimeSpan.FromSeconds(1));
        using var release = new ManualResetEventSlim();
        ThreadPool.GetMinThreads(out int workers, out _);
        Task[] blocked = [.. Enumerable.Range(0, 20 * workers).Select(_ => Task.Run(release.Wait))];
        Exception? seen = null;
        var caller = new Thread(() => seen = Record.Exception(() => toolkit.Call("eval", "while (true) { }")));
        caller.Start();

        bool ended = caller.Join(TimeSpan.FromSeconds(30));
        release.Set();
        await Task.WhenAll(blocked);
        Assert.True(ended);
        Assert.IsType<ToolkitFailedException>(seen);
    }

    [Fact]
    public void A_crash_is_told_and_the_next_call_finds_a_fresh_toolkit()
    {
        using var toolkit = new ScriptedToolkit(TimeSpan.FromSeconds(5));

        Assert.Throws<ToolkitFailedException>(() => toolkit.Call("eval", "toolkit = null; throw new WebAssembly.RuntimeError('x')"));
        Assert.Equal("CCO", toolkit.Call("qcCanonical", "OCC").Smiles);
    }

    [Fact]
    public void Calls_from_several_threads_take_turns()
    {
        using var toolkit = new ScriptedToolkit(TimeSpan.FromSeconds(5));
        string[] chains = [.. Enumerable.Range(1, 40).Select(length => new string('C', length))];

        Assert.Equal(chains, chains.AsParallel().AsOrdered().Select(chain => toolkit.Call("qcCanonical", chain).Smiles!).ToArray());
    }

    [Fact]
    public void A_toolkit_disposed_of_says_so()
    {
        var toolkit = new ScriptedToolkit(TimeSpan.FromSeconds(5));
        toolkit.Dispose();
        Assert.Throws<ObjectDisposedException>(() => toolkit.Call("qcCanonical", "C"));
    }
}
