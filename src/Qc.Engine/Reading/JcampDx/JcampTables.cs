namespace Qc.Engine.Reading.JcampDx;

/// <summary>One table of a block.</summary>
/// <param name="Record">Its record.</param>
/// <param name="Form">Variable list in upper case without blanks, "(X++(Y..Y))".</param>
/// <param name="Symbol">Symbol of the ordinate: 'Y', 'R', 'I'.</param>
/// <param name="PagePoints">Text of NPOINTS on its page, else null.</param>
internal sealed record JcampTable(JcampRecord Record, string Form, char Symbol, JcampRecord? PagePoints)
{
    /// <summary>Whether the lines are X and then equidistant ordinates.</summary>
    public bool IsEquidistant => Form.StartsWith("(X++(", StringComparison.Ordinal);

    /// <summary>Whether the table is pairs.</summary>
    public bool IsPairs => Form.StartsWith("(X" + Symbol + "..X", StringComparison.Ordinal);
}

/// <summary>The records of a block parted into header and tables.</summary>
internal sealed class JcampTables
{
    public List<JcampRecord> Header { get; } = [];

    public List<JcampTable> Tables { get; } = [];

    /// <summary>Whether the tables are pages of NTUPLES.</summary>
    public bool IsNtuples { get; private set; }

    /// <summary>Whether the block lists peaks.</summary>
    public bool HasPeaks { get; private set; }

    public static JcampTables Of(ReadOnlySpan<byte> content, JcampBlock block)
    {
        var parts = new JcampTables();
        var onPage = false;
        JcampRecord? pagePoints = null;
        foreach (var record in block.Records)
        {
            switch (record.Label)
            {
                case "XYDATA" or "XYPOINTS" or "DATATABLE" or "RADATA":
                    parts.Tables.Add(TableOf(content, record, pagePoints));
                    break;
                case "PEAKTABLE" or "PEAKASSIGNMENTS":
                    parts.HasPeaks = true;
                    break;
                case "PAGE":
                    onPage = true;
                    pagePoints = null;
                    break;
                case "ENDNTUPLES":
                    onPage = false;
                    break;
                case "NPOINTS" when onPage:
                    pagePoints = record;
                    break;
                default:
                    parts.IsNtuples |= record.Label == "NTUPLES";
                    if (!onPage)
                    {
                        parts.Header.Add(record);
                    }

                    break;
            }
        }

        return parts;
    }

    private static JcampTable TableOf(ReadOnlySpan<byte> content, JcampRecord record, JcampRecord? pagePoints)
    {
        var form = JcampText.Keyword(content, record);
        var symbol = form.StartsWith("(X++(", StringComparison.Ordinal) && form.Length > 5 ? form[5]
            : form.StartsWith("(X", StringComparison.Ordinal) && form.Length > 2 ? form[2]
            : 'Y';
        return new JcampTable(record, form, symbol, pagePoints);
    }
}
