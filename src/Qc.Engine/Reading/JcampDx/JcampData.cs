using static System.FormattableString;

namespace Qc.Engine.Reading.JcampDx;

/// <summary>The ordinates of a block in real units, in file order, and their axis.</summary>
internal sealed record JcampData(double[] Real, double[]? Imaginary, double First, double Step, string Units);

/// <summary>Reads the tables of one block.</summary>
internal sealed class JcampDataReader(ReadOnlyMemory<byte> content, JcampTables tables, JcampHeader header, ReadingBudget budget)
{
    private readonly ReadingLog _log = header.Log;

    public bool TryRead(out JcampData? data)
    {
        data = null;
        if (tables.Tables.Count == 0)
        {
            return _log.Fail("XYDATA", 0, "##XYDATA=, ##XYPOINTS= or ##NTUPLES= with pages", "The block holds no data table");
        }

        if (tables.IsNtuples)
        {
            return TryReadPages(out data);
        }

        if (tables.Tables.Count > 1)
        {
            var second = tables.Tables[1].Record;
            return _log.Fail(second.Label, second.Line, "one data table in a block", "There is a second data table");
        }

        var table = tables.Tables[0];
        return table.IsEquidistant ? TryReadXyData(table, out data)
            : table.IsPairs ? TryReadPairs(table, out data)
            : _log.Fail(table.Record.Label, table.Record.Line, "(X++(Y..Y)) or (XY..XY)", FormUnknown(table));
    }

    private static string FormUnknown(JcampTable table) => $"The form '{JcampHeader.Shown(table.Form)}' is not read";

    private bool TryReadXyData(JcampTable table, out JcampData? data)
    {
        data = null;
        if (!header.TryNumber("FIRSTX", out double first)
            || !header.TryNumber("LASTX", out double last)
            || !header.TryNumber("NPOINTS", out double stated)
            || !header.TryNumber("DELTAX", out double? delta)
            || !TryFactor("XFACTOR", out var xFactor)
            || !TryFactor("YFACTOR", out var yFactor)
            || !PointCount.TryGet(stated, "NPOINTS", header.LineOf("NPOINTS"), _log, out var points))
        {
            return false;
        }

        var axis = new Abscissa(
            first, last, delta, xFactor, points, header.Keyword("XUNITS"), "NPOINTS", header.LineOf("NPOINTS"));
        if (!TryReadOrdinates(table, axis, yFactor, out var real, out var step))
        {
            return false;
        }

        CheckFirst("FIRSTY", header.Fact("FIRSTY"), real[0]);
        data = new JcampData(real, null, first, step, axis.Units);
        return true;
    }

    private bool TryReadPages(out JcampData? data)
    {
        data = null;
        var columns = new NtuplesColumns(header);
        if (!columns.TryGetAbscissa(out var axis))
        {
            return false;
        }

        double[]? real = null;
        double[]? imaginary = null;
        var step = 0.0;
        foreach (var table in tables.Tables)
        {
            var isImaginary = table.Symbol == 'I';
            var record = table.Record;
            if ((isImaginary ? imaginary : real) is not null)
            {
                return _log.Fail(record.Label, record.Line, "one page of each part", "There is a second page of the same part");
            }

            if (!table.IsEquidistant || !(isImaginary || table.Symbol is 'R' or 'Y'))
            {
                return _log.Fail(record.Label, record.Line, "(X++(R..R)) or (X++(I..I))", FormUnknown(table));
            }

            if (!TryReadPage(table, columns, axis!, out var ordinates, out step))
            {
                return false;
            }

            real = isImaginary ? real : ordinates;
            imaginary = isImaginary ? ordinates : imaginary;
        }

        if (real is null || (imaginary is not null && imaginary.Length != real.Length))
        {
            return _log.Fail(
                "NTUPLES",
                header.LineOf("NTUPLES"),
                "a real page, and an imaginary one as long if any",
                "A page is missing or short");
        }

        data = new JcampData(real, imaginary, axis!.First, step, axis.Units);
        return true;
    }

    private bool TryReadPage(JcampTable table, NtuplesColumns columns, Abscissa axis, out double[] ordinates, out double step)
    {
        ordinates = [];
        step = 0;
        var column = columns.IndexOf(table.Symbol);
        if (column < 0)
        {
            return _log.Fail("SYMBOL", header.LineOf("SYMBOL"), $"a column {table.Symbol}", "A page has no column declared");
        }

        if (table.PagePoints is { } record)
        {
            var text = JcampText.Keyword(content.Span, record);
            if (!AffnNumber.TryParse(text, out var stated))
            {
                return _log.Fail("NPOINTS", record.Line, "a whole number", $"'{JcampHeader.Shown(text)}' is not a number");
            }

            if (!PointCount.TryGet(stated, "NPOINTS", record.Line, _log, out var points))
            {
                return false;
            }

            axis = axis with { Points = points, Label = "NPOINTS", Line = record.Line };
        }

        if (!columns.TryNumber("FACTOR", column, out var factor)
            || !columns.TryNumber("FIRST", column, out var first)
            || !TryReadOrdinates(table, axis, factor ?? 1, out ordinates, out step))
        {
            return false;
        }

        CheckFirst("FIRST", first, ordinates[0]);
        return true;
    }

    private bool TryReadPairs(JcampTable table, out JcampData? data)
    {
        data = null;
        var record = table.Record;
        var text = TableText(record);
        if (!TryFactor("XFACTOR", out var xFactor)
            || !TryFactor("YFACTOR", out var yFactor)
            || !header.TryNumber("NPOINTS", out double? stated)
            || !XyPairs.TryRead(text.Span, record, budget.Left, _log, out var x, out var y)
            || !budget.TrySpend(y.Length, record.Label, record.Line, _log))
        {
            return false;
        }

        if (stated is { } n && n != y.Length)
        {
            return _log.Fail(
                "NPOINTS", header.LineOf("NPOINTS"), Invariant($"{n} pairs"), Invariant($"The table holds {y.Length} pairs"));
        }

        if (!EquidistantAxis.TryFit(x, record.Label, record.Line, _log, out var first, out var step)
            || !TryScale(y, yFactor, record))
        {
            return false;
        }

        data = new JcampData(y, null, first * xFactor, step * xFactor, header.Keyword("XUNITS"));
        return true;
    }

    private bool TryReadOrdinates(JcampTable table, Abscissa axis, double factor, out double[] ordinates, out double step)
    {
        step = 0;
        var record = table.Record;
        if (!AsdfDecoder.TryDecode(
                TableText(record).Span, record.Label, record.Line + 1, axis.Points, budget.Left, _log, out ordinates, out var marks)
            || !budget.TrySpend(ordinates.Length, record.Label, record.Line, _log)
            || !axis.TryGetStep(ordinates.Length, _log, out step)
            || !XColumnCheck.Run(marks, axis, step, ordinates.Length, record.Label, _log))
        {
            return false;
        }

        return TryScale(ordinates, factor, record);
    }

    private bool TryScale(double[] ordinates, double factor, JcampRecord record)
    {
        if (factor == 0)
        {
            return _log.Fail(record.Label, record.Line, "a factor other than 0", "The factor of the ordinates is 0");
        }

        for (var i = 0; i < ordinates.Length; i++)
        {
            ordinates[i] *= factor;
            if (!double.IsFinite(ordinates[i]))
            {
                return _log.Fail(record.Label, record.Line, "finite ordinates", "An ordinate times its factor is not finite");
            }
        }

        return true;
    }

    private bool TryFactor(string label, out double factor)
    {
        var done = header.TryNumber(label, out double? stated);
        factor = stated ?? 1;
        if (done && stated is null)
        {
            _log.Warn(label, 0, "The factor is missing; 1 is taken");
        }

        return done;
    }

    // FIRSTY is a checksum of the factor; real files have it stale or rounded, so that it decides nothing.
    private void CheckFirst(string label, double? stated, double read)
    {
        if (stated is { } first && Math.Abs(first - read) > 1e-3 * Math.Max(Math.Abs(first), Math.Abs(read)))
        {
            _log.Warn(label, header.LineOf(label), Invariant($"The first ordinate is stated as {first}, but the table has {read}"));
        }
    }

    private ReadOnlyMemory<byte> TableText(JcampRecord record)
    {
        var value = content[record.ValueStart..record.ValueEnd];
        var end = TextLines.EndOfLine(value.Span, 0);
        return value[TextLines.AfterBreak(value.Span, end)..];
    }
}
