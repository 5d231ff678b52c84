using System.Text;

namespace Qc.Engine.Reading.JcampDx;

/// <summary>
/// JCAMP-DX for one-dimensional NMR. Sources: McDonald and Wilks, Appl. Spectrosc. 1988, 42, 151 (4.24); Davies and Lampen,
/// Appl. Spectrosc. 1993, 47, 1093 (5.00 for NMR); Lampen et al., Pure Appl. Chem. 1999, 71, 1549 (5.01).
/// </summary>
internal static class JcampReader
{
    private static readonly string[] s_versions = ["4.24", "5.0", "5.00", "5.01", "6.0", "6.00"];

    private enum BlockKind
    {
        Other,
        Spectrum,
        Fid,
    }

    public static ReadingResult Read(ReadOnlyMemory<byte> content, ReadingLog fileLog)
    {
        if (!JcampRecord.TryScan(content.Span, fileLog, out var records)
            || !JcampBlocks.TryBuild(content.Span, records, fileLog, out var blocks))
        {
            return ReadingResult.Rejected(fileLog.Error!);
        }

        var encoding = JcampText.EncodingOf(content.Span);
        var budget = new ReadingBudget(fileLog.Limits.MaxPoints);
        var measurements = new List<Measurement>();
        foreach (var block in blocks)
        {
            var log = new ReadingLog(fileLog.Limits);
            if (!TryReadBlock(content, block, encoding, budget, log, fileLog, out var measurement))
            {
                return ReadingResult.Rejected(log.Error!);
            }

            if (measurement is not null)
            {
                measurements.Add(measurement);
            }
        }

        if (measurements.Count == 0)
        {
            fileLog.Fail("DATATYPE", blocks[0].Line, "NMR SPECTRUM or NMR FID", NothingToRead(fileLog));
            return ReadingResult.Rejected(fileLog.Error!);
        }

        return ReadingResult.Read([.. measurements.Select(m => m with { Warnings = [.. fileLog.Warnings, .. m.Warnings] })]);
    }

    private static string NothingToRead(ReadingLog log) =>
        "No block holds a one-dimensional NMR measurement" + (log.Warnings.Length > 0 ? $" ({log.Warnings[^1].Message.TrimEnd('.')})" : "");

    private static bool TryReadBlock(
        ReadOnlyMemory<byte> content,
        JcampBlock block,
        Encoding encoding,
        ReadingBudget budget,
        ReadingLog log,
        ReadingLog fileLog,
        out Measurement? measurement)
    {
        measurement = null;
        var tables = JcampTables.Of(content.Span, block);
        var header = new JcampHeader(content.Span, encoding, tables.Header, log);
        if (!TryKind(header, block, tables, fileLog, out var kind))
        {
            return false;
        }

        if (kind == BlockKind.Other)
        {
            return true;
        }

        var version = header.Keyword("JCAMPDX");
        if (!s_versions.Contains(version))
        {
            log.Warn(
                "JCAMPDX",
                header.LineOf("JCAMPDX"),
                $"The version '{JcampHeader.Shown(version)}' is not one of 4.24, 5.00, 5.01, 6.00");
        }

        if (!new JcampFacts(header).TryRead(out var facts)
            || !new JcampDataReader(content, tables, header, budget).TryRead(out var data))
        {
            return false;
        }

        if (kind == BlockKind.Fid)
        {
            var isFid = JcampFid.TryBuild(header, facts!, data!, out var fid);
            measurement = fid;
            return isFid;
        }

        var isSpectrum = JcampSpectrum.TryBuild(header, facts!, data!, out var spectrum);
        measurement = spectrum;
        return isSpectrum;
    }

    // A block of a compound file that is no measurement (a structure, a peak list) is passed over and noted; a file that is
    // nothing else is an error.
    private static bool TryKind(
        JcampHeader header, JcampBlock block, JcampTables tables, ReadingLog fileLog, out BlockKind kind)
    {
        var type = header.Keyword("DATATYPE");
        kind = type switch
        {
            "NMRSPECTRUM" or "NDNMRSPECTRUM" => BlockKind.Spectrum,
            "NMRFID" or "NDNMRFID" => BlockKind.Fid,
            _ => BlockKind.Other,
        };
        if (!header.IsUnique("DATATYPE"))
        {
            return false;
        }

        var dimensions = header.Fact("NUMDIM") ?? (type.StartsWith("ND", StringComparison.Ordinal) ? 2 : 1);
        var onlyPeaks = (tables.HasPeaks && tables.Tables.Count == 0) || type is "NMRPEAKTABLE" or "NMRPEAKASSIGNMENTS";
        if (kind != BlockKind.Other && dimensions == 1 && !onlyPeaks)
        {
            return true;
        }

        kind = BlockKind.Other;
        if (!block.IsInside && dimensions != 1)
        {
            return header.Log.Fail("NUMDIM", header.LineOf("NUMDIM"), "1", "Only one-dimensional measurements are read");
        }

        if (!block.IsInside && onlyPeaks)
        {
            return header.Log.Fail(
                "DATATYPE",
                header.LineOf("DATATYPE"),
                "NMR SPECTRUM or NMR FID with a data table",
                "A peak table holds no line shapes that could be judged");
        }

        var name = type.Length > 0 ? $"'{JcampHeader.Shown(header.Text("DATATYPE"))}'" : "without ##DATA TYPE=";
        fileLog.Warn("DATATYPE", block.Line, $"A block {name} is no one-dimensional NMR measurement and was passed over");
        return true;
    }
}
