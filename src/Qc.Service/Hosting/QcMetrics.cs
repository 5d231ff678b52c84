using System.Diagnostics.Metrics;
using Qc.Engine.Verdicts;

namespace Qc.Service.Hosting;

/// <summary>Figures of the service's own for /metrics.</summary>
public sealed class QcMetrics : IDisposable
{
    /// <summary>Name of the meter.</summary>
    public const string MeterName = "Qc";

    private readonly Meter _meter = new(MeterName);
    private readonly Counter<long> _lots;
    private readonly Histogram<double> _duration;

    /// <summary>Makes the instruments.</summary>
    public QcMetrics()
    {
        _lots = _meter.CreateCounter<long>("qc_lots_checked", description: "Lots checked, by verdict");
        _duration = _meter.CreateHistogram<double>("qc_check_duration_seconds", "s", "Time the engine took for a lot");
    }

    /// <summary>A lot was checked.</summary>
    public void Checked(CheckReport report, TimeSpan duration)
    {
        string verdict = report.Unreadable ? "unreadable" : report.Verdict == Outcome.Pass ? "pass" : "flag";
        _lots.Add(1, new KeyValuePair<string, object?>("verdict", verdict));
        _duration.Record(duration.TotalSeconds);
    }

    /// <inheritdoc/>
    public void Dispose() => _meter.Dispose();
}
