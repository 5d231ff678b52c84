using static System.FormattableString;

namespace Qc.Engine.Reading.JcampDx;

/// <summary>
/// Sorts records into blocks; compound blocks are opened, the others kept in file order. A missing END and a wrong count of
/// BLOCKS are departures only: what a cut file lost shows in the counts of points.
/// </summary>
internal ref struct JcampBlocks
{
    private readonly ReadOnlySpan<byte> _content;
    private readonly ReadingLog _log;
    private readonly List<JcampBlock> _blocks = [];
    private readonly Stack<JcampBlock> _open = new();

    private JcampBlocks(ReadOnlySpan<byte> content, ReadingLog log)
    {
        _content = content;
        _log = log;
    }

    public static bool TryBuild(
        ReadOnlySpan<byte> content, List<JcampRecord> records, ReadingLog log, out List<JcampBlock> blocks)
    {
        var builder = new JcampBlocks(content, log);
        blocks = builder._blocks;
        return builder.TrySort(records);
    }

    private readonly bool TrySort(List<JcampRecord> records)
    {
        foreach (var record in records)
        {
            if (record.Label == "TITLE")
            {
                if (!TryOpen(record))
                {
                    return false;
                }
            }
            else if (record.Label == "END")
            {
                Close(record);
            }
            else
            {
                Keep(record);
            }
        }

        while (_open.TryPop(out var block))
        {
            _log.Warn("END", 0, Invariant($"The block of line {block.Line} has no ##END="));
            Finish(block);
        }

        return _blocks.Count > 0 || _log.Fail("TITLE", 1, "##TITLE= and the labels after it", "The file has no labels");
    }

    private readonly bool TryOpen(JcampRecord record)
    {
        if (_open.TryPeek(out var outer) && !outer.IsLink)
        {
            _log.Warn("END", record.Line, Invariant($"The block of line {outer.Line} has no ##END= before the next ##TITLE="));
            Finish(_open.Pop());
        }

        if (_open.Count >= _log.Limits.MaxNesting)
        {
            return _log.Fail(
                "TITLE", record.Line, Invariant($"at most {_log.Limits.MaxNesting} levels"), "Blocks are nested too deeply");
        }

        if (_open.TryPeek(out var link))
        {
            link.Inner++;
        }

        var block = new JcampBlock(record.Line, _open.Count > 0);
        block.Records.Add(record);
        _open.Push(block);
        return true;
    }

    private readonly void Keep(JcampRecord record)
    {
        if (_open.Count == 0 && _blocks.Count == 0)
        {
            _log.Warn(record.Label, record.Line, "The block does not begin with ##TITLE=");
            _open.Push(new JcampBlock(record.Line, false));
        }

        if (!_open.TryPeek(out var block))
        {
            _log.Warn(record.Label, record.Line, "The label stands outside any block and was passed over");
            return;
        }

        block.Records.Add(record);
        block.IsLink |= record.Label == "DATATYPE" && JcampText.Keyword(_content, record) == "LINK";
    }

    private readonly void Close(JcampRecord record)
    {
        if (_open.TryPop(out var block))
        {
            Finish(block);
        }
        else
        {
            _log.Warn(record.Label, record.Line, "##END= without a block to end");
        }
    }

    private readonly void Finish(JcampBlock block)
    {
        if (!block.IsLink)
        {
            _blocks.Add(block);
            return;
        }

        var record = block.Records.Find(r => r.Label == "BLOCKS");
        if (record.Label is not null
            && AffnNumber.TryParse(JcampText.Keyword(_content, record), out var stated)
            && stated != block.Inner)
        {
            _log.Warn("BLOCKS", record.Line, Invariant($"{stated} blocks are stated, but there are {block.Inner}"));
        }
    }
}
