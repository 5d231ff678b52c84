using static System.FormattableString;

namespace Qc.Engine.Reading.JcampDx;

/// <summary>The records of one block, from its TITLE to its END, without those of blocks inside it.</summary>
internal sealed class JcampBlock(int line, bool isInside)
{
    /// <summary>Line of the TITLE.</summary>
    public int Line { get; } = line;

    /// <summary>Whether the block stands in a compound file.</summary>
    public bool IsInside { get; } = isInside;

    public List<JcampRecord> Records { get; } = [];

    /// <summary>Whether the block only holds others.</summary>
    public bool IsLink { get; private set; }

    private int Inner { get; set; }

    /// <summary>Sorts records into blocks; compound blocks (DATA TYPE= LINK) are opened, blocks without measurement kept.</summary>
    /// <remarks>
    /// A missing END and a wrong count of BLOCKS are departures only: what a cut file lost shows in the point counts.
    /// </remarks>
    public static bool TryBuild(
        ReadOnlySpan<byte> content, List<JcampRecord> records, ReadingLog log, out List<JcampBlock> blocks)
    {
        blocks = [];
        var open = new Stack<JcampBlock>();
        foreach (var record in records)
        {
            switch (record.Label)
            {
                case "TITLE":
                    if (!TryOpen(content, record, open, blocks, log))
                    {
                        return false;
                    }

                    break;
                case "END":
                    Close(content, record, open, blocks, log);
                    break;
                default:
                    if (open.Count == 0 && blocks.Count == 0)
                    {
                        log.Warn(record.Label, record.Line, "The block does not begin with ##TITLE=");
                        open.Push(new JcampBlock(record.Line, false));
                    }

                    Keep(content, record, open, log);
                    break;
            }
        }

        while (open.TryPop(out var block))
        {
            log.Warn("END", 0, Invariant($"The block of line {block.Line} has no ##END="));
            Finish(content, block, blocks, log);
        }

        return blocks.Count > 0 || log.Fail("TITLE", 1, "##TITLE= and the labels after it", "The file has no labels");
    }

    private static bool TryOpen(
        ReadOnlySpan<byte> content, JcampRecord record, Stack<JcampBlock> open, List<JcampBlock> blocks, ReadingLog log)
    {
        if (open.TryPeek(out var outer) && !outer.IsLink)
        {
            log.Warn("END", record.Line, Invariant($"The block of line {outer.Line} has no ##END= before the next ##TITLE="));
            Finish(content, open.Pop(), blocks, log);
        }

        if (open.Count >= log.Limits.MaxNesting)
        {
            return log.Fail(
                "TITLE", record.Line, Invariant($"at most {log.Limits.MaxNesting} levels"), "Blocks are nested too deeply");
        }

        if (open.TryPeek(out var link))
        {
            link.Inner++;
        }

        var block = new JcampBlock(record.Line, open.Count > 0);
        block.Records.Add(record);
        open.Push(block);
        return true;
    }

    private static void Keep(ReadOnlySpan<byte> content, JcampRecord record, Stack<JcampBlock> open, ReadingLog log)
    {
        if (!open.TryPeek(out var block))
        {
            log.Warn(record.Label, record.Line, "The label stands outside any block and was passed over");
            return;
        }

        block.Records.Add(record);
        if (record.Label == "DATATYPE" && JcampText.Keyword(content, record) == "LINK")
        {
            block.IsLink = true;
        }
    }

    private static void Close(
        ReadOnlySpan<byte> content, JcampRecord record, Stack<JcampBlock> open, List<JcampBlock> blocks, ReadingLog log)
    {
        if (open.TryPop(out var block))
        {
            Finish(content, block, blocks, log);
        }
        else
        {
            log.Warn(record.Label, record.Line, "##END= without a block to end");
        }
    }

    private static void Finish(ReadOnlySpan<byte> content, JcampBlock block, List<JcampBlock> blocks, ReadingLog log)
    {
        if (!block.IsLink)
        {
            blocks.Add(block);
            return;
        }

        var record = block.Records.Find(r => r.Label == "BLOCKS");
        if (record.Label is not null
            && AffnNumber.TryParse(JcampText.Keyword(content, record), out var stated)
            && stated != block.Inner)
        {
            log.Warn("BLOCKS", record.Line, Invariant($"{stated} blocks are stated, but there are {block.Inner}"));
        }
    }
}
