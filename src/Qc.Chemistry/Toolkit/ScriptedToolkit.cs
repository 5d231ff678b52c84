using Microsoft.ClearScript;
using Microsoft.ClearScript.JavaScript;
using Microsoft.ClearScript.V8;

namespace Qc.Chemistry.Toolkit;

/// <summary>The toolkit did not answer: it took too long, ran out of memory or crashed. It starts afresh at the next call.</summary>
internal sealed class ToolkitFailedException(string message, Exception? inner) : Exception(message, inner);

/// <summary>
/// The structure toolkit: a WebAssembly module run by one V8 engine behind a lock.
/// Starts at the first call (about 0.4 s, 235 MB), and anew after a failure, because a module stopped halfway
/// may hold a broken heap.
/// </summary>
internal sealed class ScriptedToolkit(TimeSpan timeLimit) : IDisposable
{
    // Without this, V8 recompiles hot WebAssembly in the background; when it then drops the old code, the host layer can run
    // the clean-up inside V8's own lock, and every engine of the process stands still. Observed as a deadlock, with a native stack.
    static ScriptedToolkit() => V8Settings.GlobalFlags |= V8GlobalFlags.DisableBackgroundWork;

    private readonly Lock _gate = new();
    private readonly Watchdog _watchdog = new(timeLimit);
    private V8ScriptEngine? _engine;
    private bool _disposed;

    /// <summary>Calls a function of the glue script with texts and reads its answer.</summary>
    /// <exception cref="ToolkitFailedException">No answer within the time limit, or a crash.</exception>
    /// <exception cref="InvalidOperationException">The toolkit does not start: the installation is damaged.</exception>
    /// <exception cref="ObjectDisposedException">The toolkit was disposed of.</exception>
    public ToolkitReply Call(string function, params object[] arguments)
    {
        lock (_gate)
        {
            ObjectDisposedException.ThrowIf(_disposed, this);
            _engine ??= Start();
            try
            {
                V8ScriptEngine engine = _engine;
                return ToolkitReply.Parse(_watchdog.Guard(() => (string)engine.Invoke(function, arguments), engine.Interrupt));
            }
            catch (Exception failure) when (failure is IScriptEngineException)
            {
                _engine.Dispose();
                _engine = null;
                string reason = failure is ScriptInterruptedException
                    ? $"The structure toolkit took longer than {timeLimit.TotalSeconds:0.#} s."
                    : "The structure toolkit failed on this structure.";
                throw new ToolkitFailedException(reason, failure);
            }
        }
    }

    /// <summary>Stops the engine.</summary>
    public void Dispose()
    {
        lock (_gate)
        {
            _disposed = true;
            _watchdog.Dispose();
            _engine?.Dispose();
            _engine = null;
        }
    }

    private static V8ScriptEngine Start()
    {
        string folder = Path.Combine(AppContext.BaseDirectory, "rdkit");
        var engine = new V8ScriptEngine();
        try
        {
            engine.Execute("RDKit_minimal.js", File.ReadAllText(Path.Combine(folder, "RDKit_minimal.js")));
            engine.Execute("glue.js", ReadGlue());
            byte[] module = File.ReadAllBytes(Path.Combine(folder, "RDKit_minimal.wasm"));
            var bytes = (ITypedArray<byte>)engine.Invoke("eval", $"new Uint8Array({module.Length})");
            bytes.WriteBytes(module, 0, (ulong)module.Length, 0);
            engine.Invoke("qcStart", bytes);
            string state = (string)engine.Invoke("qcState");
            return state == "ready" ? engine : throw new InvalidOperationException($"The structure toolkit does not start: {state}");
        }
        catch
        {
            engine.Dispose();
            throw;
        }
    }

    private static string ReadGlue()
    {
        using Stream stream = typeof(ScriptedToolkit).Assembly.GetManifestResourceStream("Qc.Chemistry.Toolkit.glue.js")
            ?? throw new InvalidOperationException("The glue script is not in the assembly.");
        using var reader = new StreamReader(stream);
        return reader.ReadToEnd();
    }
}
