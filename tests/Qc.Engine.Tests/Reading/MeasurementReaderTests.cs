using System.Globalization;
using System.Text;
using Qc.Engine.Reading;
using Xunit;

namespace Qc.Engine.Tests.Reading;

/// <summary>Dispatch, limits and culture.</summary>
public class MeasurementReaderTests
{
    private const string Csv = "# frequencyMHz= 400\n10.5,1\n9.5,2\n";

    [Theory]
    [InlineData(SpectrumFormat.JcampDx, "<?xml version=\"1.0\"?><nmrML/>", "nmrML")]
    [InlineData(SpectrumFormat.JcampDx, "10.5,1\n9.5,2\n", "CSV")]
    [InlineData(SpectrumFormat.Csv, Jcamp.Mini, "JCAMP-DX")]
    [InlineData(SpectrumFormat.NmrMl, Jcamp.Mini, "JCAMP-DX")]
    [InlineData(SpectrumFormat.NmrMl, "<html></html>", "HTML")]
    [InlineData(SpectrumFormat.JcampDx, "PK\u0003\u0004", "ZIP")]
    [InlineData(SpectrumFormat.JcampDx, "%PDF-1.7", "PDF")]
    [InlineData(SpectrumFormat.Csv, "  \n", "empty")]
    public void Content_of_another_kind_is_named_and_not_read(SpectrumFormat declared, string text, string kind)
    {
        var result = MeasurementReader.Read(declared, Encoding.UTF8.GetBytes(text));

        Assert.Empty(result.Measurements);
        Assert.Contains(kind, result.Error!.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void Utf16_and_an_undefined_format_are_errors()
    {
        var text = Encoding.Unicode.GetPreamble().Concat(Encoding.Unicode.GetBytes(Jcamp.Mini)).ToArray();

        Assert.Contains("UTF-16", MeasurementReader.Read(SpectrumFormat.JcampDx, text).Error!.Message, StringComparison.Ordinal);
        Assert.NotNull(MeasurementReader.Read((SpectrumFormat)9, text).Error);
    }

    [Fact]
    public void Each_limit_holds_to_the_unit()
    {
        var mini = Encoding.ASCII.GetBytes(Jcamp.Mini);
        var longest = Jcamp.Mini.Split('\n').Max(l => l.Length);
        var records = Jcamp.Mini.Split("##").Length - 1;

        Assert.Null(Error(mini, new ReadingLimits { MaxBytes = mini.Length, MaxPoints = 12, MaxLineBytes = longest, MaxRecords = records }));
        Assert.NotNull(Error(mini, new ReadingLimits { MaxBytes = mini.Length - 1 }));
        Assert.NotNull(Error(mini, new ReadingLimits { MaxPoints = 11 }));
        Assert.NotNull(Error(mini, new ReadingLimits { MaxLineBytes = longest - 1 }));
        Assert.NotNull(Error(mini, new ReadingLimits { MaxRecords = records - 1 }));
        Assert.NotNull(Error(Encoding.ASCII.GetBytes(Jcamp.MiniFid), new ReadingLimits { MaxPoints = 7 }));
        Assert.Null(Error(Encoding.ASCII.GetBytes(Jcamp.MiniFid), new ReadingLimits { MaxPoints = 8 }));
    }

    [Fact]
    public void The_points_of_all_blocks_count_together()
    {
        var two = Encoding.ASCII.GetBytes(Jcamp.Mini + "\n" + Jcamp.Mini);

        Assert.Null(Error(two, new ReadingLimits { MaxPoints = 24 }));
        Assert.NotNull(Error(two, new ReadingLimits { MaxPoints = 23 }));
    }

    [Fact]
    public void Warnings_are_limited_and_say_so()
    {
        var text = Jcamp.Mini.With("FIRSTY= 50", "FIRSTY= 51").With("##XFACTOR= 1\n", "");
        var result = MeasurementReader.Read(SpectrumFormat.JcampDx, Encoding.ASCII.GetBytes(text), new ReadingLimits { MaxWarnings = 1 });

        Assert.Equal(2, result.Measurements[0].Warnings.Length);
        Assert.Contains("more departures", result.Measurements[0].Warnings[1].Message, StringComparison.Ordinal);
    }

    [Fact]
    public void A_German_culture_changes_nothing()
    {
        var (jcamp, csv, written) = Everything();
        var culture = CultureInfo.CurrentCulture;
        try
        {
            CultureInfo.CurrentCulture = CultureInfo.GetCultureInfo("de-DE");
            var (german, germanCsv, germanWritten) = Everything();

            Assert.Equal(jcamp, german);
            Assert.Equal(csv, germanCsv);
            Assert.Equal(written, germanWritten);
        }
        finally
        {
            CultureInfo.CurrentCulture = culture;
        }

        static (string, string, byte[]) Everything()
        {
            var spectrum = Jcamp.Spectrum(Jcamp.Mini.With("FIRSTY= 50", "FIRSTY= 51.5"));
            var csv = MeasurementReader.Read(SpectrumFormat.Csv, Encoding.ASCII.GetBytes(Csv));
            return (Show(spectrum), Show((SpectrumMeasurement)csv.Measurements[0]), JcampWriter.Write(spectrum, OrdinateForm.DifDup, 0.1));
        }

        static string Show(SpectrumMeasurement s) => string.Join(
            '\n',
            [
                FormattableString.Invariant($"{s.FirstPpm:R} {s.PpmPerPoint:R} {s.Facts.ObserveFrequencyMHz:R}"),
                .. s.Real.Select(v => v.ToString("R", CultureInfo.InvariantCulture)),
                .. s.Warnings.Select(w => w.Message),
            ]);
    }

    private static ReadingError? Error(byte[] content, ReadingLimits limits) =>
        MeasurementReader.Read(SpectrumFormat.JcampDx, content, limits).Error;
}
