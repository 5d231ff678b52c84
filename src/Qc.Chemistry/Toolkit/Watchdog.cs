namespace Qc.Chemistry.Toolkit;

/// <summary>
/// Calls for a stop when a guarded piece of work runs over its time. Has a thread of its own: a timer of the thread pool may never
/// fire while all pool threads and processors are busy, which is just when it is needed.
/// </summary>
internal sealed class Watchdog
{
    // A stop that comes just before the work starts is lost; the next one is not.
    private static readonly TimeSpan Repeat = TimeSpan.FromMilliseconds(200);

    private readonly object _gate = new();
    private TimeSpan _limit;
    private Action? _stop;
    private long _round;

    /// <summary>Starts the thread; it lives as long as the process.</summary>
    public Watchdog()
    {
        new Thread(Watch) { IsBackground = true, Name = "structure toolkit watchdog" }.Start();
    }

    /// <summary>Runs work; calls <paramref name="stop"/> from another thread, again and again, once it takes too long. Not reentrant.</summary>
    public T Guard<T>(TimeSpan limit, Func<T> work, Action stop)
    {
        Set(limit, stop);
        try
        {
            return work();
        }
        finally
        {
            // From here on no stop can hit the next piece of work.
            Set(limit, null);
        }
    }

    private void Set(TimeSpan limit, Action? stop)
    {
        lock (_gate)
        {
            _limit = limit;
            _stop = stop;
            _round++;
            Monitor.PulseAll(_gate);
        }
    }

    private void Watch()
    {
        lock (_gate)
        {
            while (true)
            {
                if (_stop is null)
                {
                    Monitor.Wait(_gate);
                    continue;
                }

                long round = _round;
                bool woken = Monitor.Wait(_gate, _limit);
                while (!woken && round == _round)
                {
                    _stop();
                    woken = Monitor.Wait(_gate, Repeat);
                }
            }
        }
    }
}
