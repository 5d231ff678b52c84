using Microsoft.ClearScript;
using Microsoft.ClearScript.JavaScript;
using Microsoft.ClearScript.V8;

namespace Qc.Chemistry.Toolkit;

/// <summary>
/// The one V8 engine of the process, behind a lock, and in it the structure toolkit as a WebAssembly module.
/// Starts at the first call. After a failure the module is instantiated anew, because one stopped halfway may hold a broken heap;
/// its compiled code is kept.
/// </summary>
/// <remarks>
/// The engine is never disposed of. Destroying a V8 isolate runs its pending WebAssembly compilations on the spot, and the clean-up
/// of replaced code can then wait for a lock that its own thread holds; every isolate of the process stands still from then on
/// (seen in native stacks under Microsoft.ClearScript 7.5.1).
/// </remarks>
internal static class ToolkitEngine
{
    private static readonly Lock Gate = new();
    private static readonly Watchdog Watchdog = new();
    private static V8ScriptEngine? _engine;
    private static bool _isReady;

    /// <summary>Calls a function of the glue script.</summary>
    /// <exception cref="ToolkitFailedException">No answer within the time limit, or a crash.</exception>
    /// <exception cref="InvalidOperationException">The toolkit does not start: the installation is damaged.</exception>
    public static string Call(TimeSpan limit, string function, object[] arguments)
    {
        lock (Gate)
        {
            _engine ??= Load();
            if (!_isReady)
            {
                Instantiate(_engine);
                _isReady = true;
            }

            try
            {
                return Watchdog.Guard(limit, () => (string)_engine.Invoke(function, arguments), _engine.Interrupt);
            }
            catch (Exception failure) when (failure is IScriptEngineException)
            {
                _isReady = false;
                string reason = failure is ScriptInterruptedException
                    ? FormattableString.Invariant($"The structure toolkit took longer than {limit.TotalSeconds:0.#} s.")
                    : "The structure toolkit failed on this structure.";
                throw new ToolkitFailedException(reason, failure);
            }
        }
    }

    private static void Instantiate(V8ScriptEngine engine)
    {
        engine.Invoke("qcStart");
        string state = (string)engine.Invoke("qcState");
        if (state != "ready")
        {
            throw new InvalidOperationException($"The structure toolkit does not start: {state}");
        }
    }

    private static V8ScriptEngine Load()
    {
        string folder = Path.Combine(AppContext.BaseDirectory, "rdkit");
        string script = File.ReadAllText(Path.Combine(folder, "RDKit_minimal.js"));
        byte[] module = File.ReadAllBytes(Path.Combine(folder, "RDKit_minimal.wasm"));
        var engine = new V8ScriptEngine();
        engine.Execute("RDKit_minimal.js", script);
        engine.Execute("glue.js", ReadGlue());
        var bytes = (ITypedArray<byte>)engine.Invoke("eval", FormattableString.Invariant($"new Uint8Array({module.Length})"));
        bytes.WriteBytes(module, 0, (ulong)module.Length, 0);
        engine.Invoke("qcCompile", bytes);
        return engine;
    }

    private static string ReadGlue()
    {
        using Stream stream = typeof(ToolkitEngine).Assembly.GetManifestResourceStream("Qc.Chemistry.Toolkit.glue.js")
            ?? throw new InvalidOperationException("The glue script is not in the assembly.");
        using var reader = new StreamReader(stream);
        return reader.ReadToEnd();
    }
}
