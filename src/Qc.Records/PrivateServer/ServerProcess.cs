using System.Diagnostics;

namespace Qc.Records.PrivateServer;

/// <summary>
/// The running server as a child of this process. It is started from a thread of its own that lives until disposal: where
/// Linux is asked to end a child with its parent, "parent" means the thread that started it.
/// </summary>
internal sealed class ServerProcess : IDisposable
{
    private readonly ManualResetEventSlim _released;
    private readonly Process _process;
    private readonly StreamWriter _log;

    private ServerProcess(Process process, StreamWriter log, ManualResetEventSlim released)
    {
        _process = process;
        _log = log;
        _released = released;
        TextWriter lines = TextWriter.Synchronized(log);
        process.OutputDataReceived += (_, line) => lines.WriteLine(line.Data);
        process.ErrorDataReceived += (_, line) => lines.WriteLine(line.Data);
        process.BeginOutputReadLine();
        process.BeginErrorReadLine();
    }

    /// <summary>Process id of the server.</summary>
    public int Id => _process.Id;

    /// <summary>Whether it has ended.</summary>
    public bool HasExited => _process.HasExited;

    /// <summary>Starts a server whose output goes to a log file.</summary>
    public static async Task<ServerProcess> StartAsync(ProcessStartInfo info, string logFile)
    {
        var log = new StreamWriter(logFile, append: true) { AutoFlush = true };
        var released = new ManualResetEventSlim();
        var started = new TaskCompletionSource<Process>(TaskCreationOptions.RunContinuationsAsynchronously);
        var thread = new Thread(() => Hold(info, started, released)) { IsBackground = true, Name = "private PostgreSQL" };
        thread.Start();
        try
        {
            return new ServerProcess(await started.Task, log, released);
        }
        catch
        {
            await log.DisposeAsync();
            throw;
        }
    }

    /// <summary>Waits until the server has ended and all it printed is in the log.</summary>
    public Task WaitForExitAsync(CancellationToken cancellation) => _process.WaitForExitAsync(cancellation);

    /// <summary>Ends the server without its consent; what it had committed is in its log and comes back at the next start.</summary>
    public void Kill() => _process.Kill(entireProcessTree: true);

    /// <inheritdoc/>
    public void Dispose()
    {
        _released.Set();
        _process.Dispose();
        _log.Dispose();
    }

    private static void Hold(ProcessStartInfo info, TaskCompletionSource<Process> started, ManualResetEventSlim released)
    {
        try
        {
            started.SetResult(Process.Start(info) ?? throw new PrivatePostgresException($"{info.FileName} could not be started."));
        }
        catch (System.ComponentModel.Win32Exception e)
        {
            started.SetException(new PrivatePostgresException($"{info.FileName} could not be started: {e.Message}", e));
            return;
        }

        released.Wait();
    }
}
