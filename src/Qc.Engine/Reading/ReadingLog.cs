using System.Collections.Immutable;
using static System.FormattableString;

namespace Qc.Engine.Reading;

/// <summary>Collects what reading one block met: the first error, and the departures it could live with.</summary>
internal sealed class ReadingLog(ReadingLimits limits)
{
    private readonly List<ReadingWarning> _warnings = [];
    private bool _full;

    public ReadingLimits Limits { get; } = limits;

    /// <summary>The first error; later ones are its consequences.</summary>
    public ReadingError? Error { get; private set; }

    public ImmutableArray<ReadingWarning> Warnings => [.. _warnings];

    /// <summary>Records an error; always false, so that a reader can return it.</summary>
    public bool Fail(string label, int line, string expected, string problem)
    {
        Error ??= new ReadingError(label, line, expected, Sentence(label, line, $"{problem}; expected {expected}."));
        return false;
    }

    public void Warn(string label, int line, string problem)
    {
        if (_warnings.Count < Limits.MaxWarnings)
        {
            _warnings.Add(new ReadingWarning(label, line, Sentence(label, line, problem + ".")));
        }
        else if (!_full)
        {
            _full = true;
            _warnings.Add(new ReadingWarning(label, line, "There were more departures than are listed here."));
        }
    }

    private static string Sentence(string label, int line, string problem)
    {
        var where = line > 0 ? Invariant($"line {line}") : "";
        var place = (label.Length, where.Length) switch
        {
            (0, 0) => "",
            (0, _) => $"{where}: ",
            (_, 0) => $"{label}: ",
            _ => $"{label}, {where}: ",
        };
        return place + problem;
    }
}
