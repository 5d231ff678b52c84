using System.Text;
using static System.FormattableString;

namespace Qc.Engine.Reading;

/// <summary>
/// Lines of "ppm,intensity", with comma, semicolon or tab between. Lines that begin with '#' are comments; "# frequencyMHz="
/// is required, "# nucleus=" (else 1H), "# solvent=" and "# title=" are optional. One heading line may come before the numbers.
/// </summary>
internal static class CsvReader
{
    private const string Label = "CSV";

    public static ReadingResult Read(ReadOnlyMemory<byte> content, ReadingLog log)
    {
        var notes = new SortedDictionary<string, string>(StringComparer.OrdinalIgnoreCase);
        if (!TryReadLines(content.Span, log, notes, out var ppm, out var intensity)
            || !TryFacts(notes, log, out var facts)
            || !EquidistantAxis.TryFit(ppm, Label, 0, log, out var first, out var step)
            || !PpmWindow.Check(first, step, ppm.Length, facts!.Nucleus, Label, 0, log))
        {
            return ReadingResult.Rejected(log.Error!);
        }

        if (step > 0)
        {
            first += step * (intensity.Length - 1);
            step = -step;
            Array.Reverse(intensity);
        }

        return ReadingResult.Read([new SpectrumMeasurement(facts, log.Warnings, intensity, null, first, step, true)]);
    }

    private static bool TryReadLines(
        ReadOnlySpan<byte> content, ReadingLog log, SortedDictionary<string, string> notes, out double[] ppm, out double[] intensity)
    {
        var (x, y) = (new List<double>(), new List<double>());
        var hasHeading = false;
        var text = Utf8Mark.Skip(content);
        ppm = intensity = [];
        for (int start = 0, line = 1; start < text.Length; line++)
        {
            var end = TextLines.EndOfLine(text, start);
            var row = text[start..end].Trim(" \t"u8);
            start = TextLines.AfterBreak(text, end);
            if (row.Length > log.Limits.MaxLineBytes)
            {
                return log.Fail(Label, line, Invariant($"at most {log.Limits.MaxLineBytes} bytes in a line"), "The line is too long");
            }

            if (row.IsEmpty)
            {
                continue;
            }

            if (row[0] == (byte)'#')
            {
                TakeNote(row[1..], notes);
            }
            else if (TryRow(row, out var shift, out var value))
            {
                if (x.Count >= log.Limits.MaxPoints)
                {
                    return log.Fail(Label, line, Invariant($"at most {log.Limits.MaxPoints} points"), "The file has too many points");
                }

                x.Add(shift);
                y.Add(value);
            }
            else if (x.Count > 0 || hasHeading)
            {
                return log.Fail(Label, line, "ppm and intensity, two finite numbers with decimal points", "The line cannot be read");
            }
            else
            {
                hasHeading = true;
            }
        }

        (ppm, intensity) = ([.. x], [.. y]);
        return true;
    }

    private static bool TryRow(ReadOnlySpan<byte> row, out double ppm, out double intensity)
    {
        var position = 0;
        intensity = 0;
        if (!AffnNumber.TryRead(row, ref position, ExponentRule.Always, out ppm))
        {
            return false;
        }

        var rest = row[position..].TrimStart(" "u8);
        if (rest.IsEmpty || rest[0] is not ((byte)',' or (byte)';' or (byte)'\t'))
        {
            return false;
        }

        rest = rest[1..].TrimStart(" \t"u8);
        position = 0;
        return AffnNumber.TryRead(rest, ref position, ExponentRule.Always, out intensity) && position == rest.Length;
    }

    private static void TakeNote(ReadOnlySpan<byte> comment, SortedDictionary<string, string> notes)
    {
        var text = Encoding.UTF8.GetString(comment);
        var equals = text.IndexOf('=', StringComparison.Ordinal);
        if (equals > 0)
        {
            notes.TryAdd(text[..equals].Trim(), text[(equals + 1)..].Trim());
        }
    }

    private static bool TryFacts(SortedDictionary<string, string> notes, ReadingLog log, out AcquisitionFacts? facts)
    {
        facts = null;
        if (!notes.TryGetValue("frequencyMHz", out var stated))
        {
            return log.Fail("frequencyMHz", 0, "a line '# frequencyMHz= 400.13'", "The observe frequency is missing");
        }

        if (!AffnNumber.TryParse(stated, out var frequency) || frequency is < 1 or > 3000)
        {
            return log.Fail("frequencyMHz", 0, "a frequency in MHz, 1 to 3000", "The observe frequency cannot be read");
        }

        var nucleus = "1H";
        if (!notes.TryGetValue("nucleus", out var name))
        {
            log.Warn("nucleus", 0, "The nucleus is not stated; 1H is taken");
        }
        else if (!NucleusName.TryParse(name, out nucleus))
        {
            return log.Fail("nucleus", 0, "an isotope such as 1H", "The nucleus cannot be read");
        }

        facts = new AcquisitionFacts
        {
            Title = notes.GetValueOrDefault("title", ""),
            Nucleus = nucleus,
            ObserveFrequencyMHz = frequency,
            SolventLabel = notes.GetValueOrDefault("solvent"),
        };
        return true;
    }
}
