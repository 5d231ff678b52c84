namespace Qc.Records.Lots;

/// <summary>A lot as submitted.</summary>
public sealed class Lot
{
    /// <summary>Identifier.</summary>
    public required string Id { get; init; }

    /// <summary>The product.</summary>
    public required string ProductId { get; init; }

    /// <summary>The specification version it is judged by.</summary>
    public required string SpecificationId { get; init; }

    /// <summary>The plant's lot number.</summary>
    public required string LotNumber { get; init; }

    /// <summary>1 for the first submission of the lot number, 2 for the next measurement of it, and so on.</summary>
    public required int Sequence { get; init; }

    /// <summary>When the sample was taken.</summary>
    public DateTimeOffset? SampledAt { get; init; }

    /// <summary>What was weighed, as posted.</summary>
    public string? SampleJson { get; init; }

    /// <summary>Instrument.</summary>
    public string? Instrument { get; init; }

    /// <summary>Where to report the outcome.</summary>
    public string? CallbackUrl { get; init; }

    /// <summary>When it was received.</summary>
    public required DateTimeOffset SubmittedAt { get; init; }

    /// <summary>From whom: "person:{user}" or "key:{id}".</summary>
    public required string SubmittedBy { get; init; }
}

/// <summary>A spectrum as received, byte for byte.</summary>
public sealed class LotSpectrum
{
    /// <summary>The lot.</summary>
    public required string LotId { get; init; }

    /// <summary>Number within the lot, from 1.</summary>
    public required int Number { get; init; }

    /// <summary>The submitter's name for it.</summary>
    public required string Name { get; init; }

    /// <summary>"jcamp-dx", "nmrml" or "csv".</summary>
    public required string Format { get; init; }

    /// <summary>SHA-256 of the bytes, lower-case hex.</summary>
    public required string Sha256 { get; init; }

    /// <summary>The bytes.</summary>
    public required byte[] Bytes { get; init; }
}

/// <summary>A state of a lot; the latest is the current one.</summary>
public sealed class LotEvent
{
    /// <summary>Order of events, given by the database.</summary>
    public long Id { get; init; }

    /// <summary>The lot.</summary>
    public required string LotId { get; init; }

    /// <summary>One of <see cref="LotState"/>.</summary>
    public required string State { get; init; }

    /// <summary>When.</summary>
    public required DateTimeOffset At { get; init; }

    /// <summary>By whom.</summary>
    public required string By { get; init; }
}

/// <summary>States of a lot, as the API names them.</summary>
public static class LotState
{
    /// <summary>Accepted, waiting for its check.</summary>
    public const string Queued = "queued";

    /// <summary>Being checked.</summary>
    public const string Checking = "checking";

    /// <summary>Checked; a verdict is there.</summary>
    public const string Checked = "checked";

    /// <summary>A spectrum could not be read.</summary>
    public const string Unreadable = "unreadable";

    /// <summary>A reviewer has decided.</summary>
    public const string Reviewed = "reviewed";

    /// <summary>Released.</summary>
    public const string Released = "released";

    /// <summary>Rejected by a person.</summary>
    public const string Rejected = "rejected";

    /// <summary>A person asked for another measurement.</summary>
    public const string Remeasure = "remeasure";
}

/// <summary>A check of a lot by the engine. A later one stands beside the first.</summary>
public sealed class Computation
{
    /// <summary>Identifier.</summary>
    public required string Id { get; init; }

    /// <summary>The lot.</summary>
    public required string LotId { get; init; }

    /// <summary>Number within the lot, from 1.</summary>
    public required int Number { get; init; }

    /// <summary>Version of the engine.</summary>
    public required string EngineVersion { get; init; }

    /// <summary>"pass", "flag", or null where unreadable.</summary>
    public string? Verdict { get; init; }

    /// <summary>Whether a spectrum could not be read.</summary>
    public required bool Unreadable { get; init; }

    /// <summary>Whether the measurement was not fit to be judged.</summary>
    public required bool Unsuitable { get; init; }

    /// <summary>Why, in a sentence or two.</summary>
    public required string Summary { get; init; }

    /// <summary>The whole report as JSON, traces left out.</summary>
    public required string ReportJson { get; init; }

    /// <summary>SHA-256 of the canonical report.</summary>
    public required string ReportSha256 { get; init; }

    /// <summary>SHA-256 of what the engine was asked: criteria, structure, spectra.</summary>
    public required string RequestSha256 { get; init; }

    /// <summary>How long it took, in ms.</summary>
    public required double DurationMilliseconds { get; init; }

    /// <summary>When.</summary>
    public required DateTimeOffset At { get; init; }
}

/// <summary>Curves of a computation for drawing, as little-endian 32-bit floats; what is left over is their difference.</summary>
public sealed class Trace
{
    /// <summary>The computation.</summary>
    public required string ComputationId { get; init; }

    /// <summary>Number of the spectrum within the lot.</summary>
    public required int SpectrumNumber { get; init; }

    /// <summary>Shift of point 0.</summary>
    public required double FirstPpm { get; init; }

    /// <summary>Step, negative.</summary>
    public required double PpmPerPoint { get; init; }

    /// <summary>Number of points.</summary>
    public required int Count { get; init; }

    /// <summary>The spectrum as judged.</summary>
    public required byte[] Measured { get; init; }

    /// <summary>The fitted model.</summary>
    public required byte[] Modelled { get; init; }
}

/// <summary>Makes a repeated submission harmless.</summary>
public sealed class IdempotencyRecord
{
    /// <summary>Who sent the key.</summary>
    public required string Principal { get; init; }

    /// <summary>The key.</summary>
    public required string Key { get; init; }

    /// <summary>SHA-256 of the body it came with.</summary>
    public required string BodySha256 { get; init; }

    /// <summary>The lot it made.</summary>
    public required string LotId { get; init; }

    /// <summary>When.</summary>
    public required DateTimeOffset At { get; init; }
}
