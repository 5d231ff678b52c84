using static System.FormattableString;
using Qc.Engine.Reading.JcampDx;
using Qc.Engine.Reading.NmrMl;

namespace Qc.Engine.Reading;

/// <summary>
/// Reads a file in the format it is declared to be in. No other format is tried: where the content plainly is another one,
/// the error says so.
/// </summary>
/// <remarks>
/// <para><b>Sign of an FID.</b> With s = Real + i·Imaginary, a line at a higher shift than the transmitter has positive
/// frequency: s(t) = exp(+2πi·ν·t), ν = (δ − CentrePpm)·ZeroPpmFrequencyMHz. The open standards leave this sign free. The data
/// are taken as written, because every measured file in which the FID and its spectrum could be compared (JCAMP-DX of 300 to
/// 600 MHz, and nmrML) follows this rule; a header that asks for a reversed spectrum gives a warning.</para>
/// <para><b>Sign of an imaginary page.</b> Kept as written. In the measured files it is the negative of the imaginary part of
/// the transform Σ s·exp(−2πi·k·n/N): a phased line is positive in it on its high-shift side.</para>
/// </remarks>
public static class MeasurementReader
{
    /// <summary>Reads every one-dimensional NMR measurement of a file.</summary>
    /// <param name="format">The format the sender declared.</param>
    /// <param name="content">The file.</param>
    /// <param name="limits">What it may cost; <see cref="ReadingLimits.Default"/> where null.</param>
    /// <returns>At least one measurement, or the error that stopped the reading.</returns>
    public static ReadingResult Read(SpectrumFormat format, ReadOnlyMemory<byte> content, ReadingLimits? limits = null)
    {
        var log = new ReadingLog(limits ?? ReadingLimits.Default);
        if (!Admit(format, content.Span, log))
        {
            return ReadingResult.Rejected(log.Error!);
        }

        return format switch
        {
            SpectrumFormat.JcampDx => JcampReader.Read(content, log),
            SpectrumFormat.NmrMl => NmrMlReader.Read(content, log),
            _ => CsvReader.Read(content, log),
        };
    }

    private static bool Admit(SpectrumFormat format, ReadOnlySpan<byte> content, ReadingLog log)
    {
        if (!Enum.IsDefined(format))
        {
            return log.Fail("", 0, "one of the formats JcampDx, NmrMl, Csv", "The declared format is unknown");
        }

        if (content.Length > log.Limits.MaxBytes)
        {
            var size = Invariant($"The file has {content.Length} bytes");
            return log.Fail("", 0, Invariant($"at most {log.Limits.MaxBytes}"), size);
        }

        var looksLike = ContentKind.Of(content);
        var declared = ContentKind.NameOf(format);
        return looksLike is null || looksLike == declared
            || log.Fail("", 0, $"{declared}, as declared", $"The content plainly is {looksLike}");
    }
}
