namespace Qc.Engine.Reading.JcampDx;

/// <summary>The records of one block, from its TITLE to its END, without those of blocks inside it.</summary>
internal sealed class JcampBlock(int line, bool isInside)
{
    /// <summary>Line of the TITLE.</summary>
    public int Line { get; } = line;

    /// <summary>Whether the block stands in a compound file.</summary>
    public bool IsInside { get; } = isInside;

    /// <summary>Whether the block only holds others (DATA TYPE= LINK).</summary>
    public bool IsLink { get; set; }

    /// <summary>Number of blocks directly inside.</summary>
    public int Inner { get; set; }

    public List<JcampRecord> Records { get; } = [];
}
