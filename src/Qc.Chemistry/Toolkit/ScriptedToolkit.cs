namespace Qc.Chemistry.Toolkit;

/// <summary>The toolkit did not answer: it took too long, ran out of memory or crashed. The next call finds it fresh.</summary>
internal sealed class ToolkitFailedException(string message, Exception? inner) : Exception(message, inner);

/// <summary>A caller's view of the structure toolkit, with a time limit of its own.</summary>
internal sealed class ScriptedToolkit(TimeSpan timeLimit) : IDisposable
{
    private volatile bool _disposed;

    /// <summary>Calls a function of the glue script with texts and reads its answer.</summary>
    /// <exception cref="ToolkitFailedException">No answer within the time limit, or a crash.</exception>
    /// <exception cref="InvalidOperationException">The toolkit does not start: the installation is damaged.</exception>
    /// <exception cref="ObjectDisposedException">The view was disposed of.</exception>
    public ToolkitReply Call(string function, params object[] arguments)
    {
        ObjectDisposedException.ThrowIf(_disposed, this);
        return ToolkitReply.Parse(ToolkitEngine.Call(timeLimit, function, arguments));
    }

    /// <summary>Ends the view; the engine stays for others.</summary>
    public void Dispose() => _disposed = true;
}
