using System.Collections.Concurrent;

namespace Qc.Service.Features.Lots;

/// <summary>
/// Wakes callers that wait for a lot (Prefer: wait). Only a courtesy within this process: where another worker checks the
/// lot the caller finds the result by looking again.
/// </summary>
public sealed class LotWaiters
{
    private readonly ConcurrentDictionary<string, TaskCompletionSource> _waiting = new(StringComparer.Ordinal);

    /// <summary>Completes when the lot is done here, or after a short time.</summary>
    public async Task WaitAsync(string lotId, TimeSpan atMost, CancellationToken cancellation)
    {
        TaskCompletionSource source = _waiting.GetOrAdd(lotId, _ => new TaskCompletionSource(TaskCreationOptions.RunContinuationsAsynchronously));
        await Task.WhenAny(source.Task, Task.Delay(atMost, cancellation));
    }

    /// <summary>The lot is done.</summary>
    public void Done(string lotId)
    {
        if (_waiting.TryRemove(lotId, out TaskCompletionSource? source))
        {
            source.TrySetResult();
        }
    }
}
