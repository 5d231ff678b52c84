namespace Qc.Engine.Reading;

/// <summary>
/// What a file may cost to read. Work is linear in the bytes of the file plus the points it unfolds to. Memory, counted as all
/// that is ever allocated, stays below 40 bytes a byte of the file plus 64 bytes a point allowed plus 1000 bytes a record
/// allowed; points count apart because one byte of a table may stand for many.
/// </summary>
public sealed record ReadingLimits
{
    /// <summary>The limits used where the caller names none.</summary>
    public static ReadingLimits Default { get; } = new();

    /// <summary>Largest file, in bytes.</summary>
    public int MaxBytes { get; init; } = 64 * 1024 * 1024;

    /// <summary>Most ordinates in a whole file; real and imaginary parts count one each.</summary>
    public int MaxPoints { get; init; } = 4_000_000;

    /// <summary>Deepest nesting of compound blocks or XML elements.</summary>
    public int MaxNesting { get; init; } = 32;

    /// <summary>Longest line of a text format, in bytes.</summary>
    public int MaxLineBytes { get; init; } = 64 * 1024;

    /// <summary>Most labelled records in one file.</summary>
    public int MaxRecords { get; init; } = 50_000;

    /// <summary>Most warnings kept for one measurement; a last one says that there were more.</summary>
    public int MaxWarnings { get; init; } = 100;
}
