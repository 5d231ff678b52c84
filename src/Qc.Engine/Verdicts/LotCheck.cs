namespace Qc.Engine.Verdicts;

/// <summary>The engine's one entry: request in, report out. Pure and deterministic.</summary>
public static class LotCheck
{
    /// <summary>Version of the rules and tables; part of every report.</summary>
    public const string EngineVersion = "0.1";

    /// <summary>Judges a lot.</summary>
    public static CheckReport Run(CheckRequest request, CancellationToken cancellation = default)
    {
        cancellation.ThrowIfCancellationRequested();
        return new CheckReport { EngineVersion = EngineVersion, Unreadable = true, Summary = "The engine is not assembled yet." };
    }
}
