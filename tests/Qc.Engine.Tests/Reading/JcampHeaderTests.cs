using System.Text;
using Qc.Engine.Reading;
using Xunit;

namespace Qc.Engine.Tests.Reading;

/// <summary>Labels, texts and facts. Rules: CHECKVALUES 8.1, 8.2 and 8.5.</summary>
public class JcampHeaderTests
{
    [Fact]
    public void Labels_are_the_same_whatever_their_case_blanks_dashes_and_slashes()
    {
        var spectrum = Jcamp.Spectrum(
            Jcamp.Mini.With("##JCAMP-DX=", "  ##jcampdx =").With("##DATA TYPE=", "##Data_Type=").With("##.OBSERVE FREQUENCY=", "##.observe-frequency="));

        Assert.DoesNotContain(spectrum.Warnings, w => w.Label == "JCAMPDX");
        Assert.Equal("5.01", spectrum.Facts.Labels["JCAMPDX"]);
    }

    [Theory]
    [InlineData("\n")]
    [InlineData("\r\n")]
    [InlineData("\r")]
    public void Lines_may_end_in_any_way_and_are_counted_alike(string lineBreak)
    {
        var text = Jcamp.Mini.ReplaceLineEndings(lineBreak);

        Assert.Equal(Jcamp.Spectrum(Jcamp.Mini).Real, Jcamp.Spectrum(text).Real);
        Assert.Equal(17, Jcamp.Error(text.With("300cK53", "300bK53")).Line);
    }

    [Fact]
    public void Comments_blank_lines_and_hidden_labels_are_passed_over()
    {
        var text = Jcamp.Mini
            .With("##NPOINTS= 12", "##= a comment record\n$$ ##NPOINTS= 99\n\n##NPOINTS= 12 $$ points\n##$PRIVATE= (0..2)\n1 2 3")
            .With("1100A00K", " \t1100A00K").With("300cK53", "\n$$ comment\n300cK53") + "\n\n";

        var spectrum = Jcamp.Spectrum(text);

        Assert.Equal(12, spectrum.Real.Length);
        Assert.Equal("(0..2)\n1 2 3", spectrum.Facts.Labels["$PRIVATE"]);
        Assert.Equal("12", spectrum.Facts.Labels["NPOINTS"]);
    }

    [Fact]
    public void Texts_are_utf8_where_they_can_be_and_latin1_otherwise()
    {
        var text = Jcamp.Mini.With("TITLE= mini", "TITLE= 25 °C µ");
        byte[][] files =
        [
            Encoding.Latin1.GetBytes(text), Encoding.UTF8.GetBytes(text), [0xEF, 0xBB, 0xBF, .. Encoding.UTF8.GetBytes(text)],
        ];

        Assert.All(files, f => Assert.Equal(
            "25 °C µ", Assert.Single(MeasurementReader.Read(SpectrumFormat.JcampDx, f).Measurements).Facts.Title));
    }

    [Theory]
    [InlineData("^1H", "1H")]
    [InlineData("1H", "1H")]
    [InlineData("<1H>", "1H")]
    [InlineData("H1", "1H")]
    [InlineData("^13c", "13C")]
    [InlineData(" 19 F ", "19F")]
    public void The_nucleus_is_read_in_every_spelling_seen(string spelling, string nucleus) =>
        Assert.Equal(nucleus, Jcamp.Spectrum(Jcamp.Mini.With("^1H", spelling)).Facts.Nucleus);

    [Fact]
    public void Standard_labels_give_the_facts_without_a_note()
    {
        var text = Jcamp.Mini.With(
            "##XUNITS", "##.SOLVENT NAME= CDCl3\n##.AVERAGES= 64 $$ scans\n##.ACQUISITION TIME= 4.5\n##TEMPERATURE= 25\n##$NS= 3\n##$TE= 300\n##XUNITS");
        var spectrum = Jcamp.Spectrum(text);
        var facts = spectrum.Facts;

        Assert.Equal(("CDCl3", 64, 4.5), (facts.SolventLabel, facts.Scans, facts.AcquisitionTimeSeconds));
        Assert.Equal(298.15, facts.TemperatureKelvin!.Value, 9);
        Assert.Null(facts.RelaxationDelaySeconds);
        Assert.DoesNotContain(spectrum.Warnings, w => w.Label.StartsWith('$'));
    }

    [Fact]
    public void Private_labels_are_a_fallback_and_each_is_noted()
    {
        var text = Jcamp.Mini.With(
            "##XUNITS", "##$SOLVENT= <DMSO>\n##$NS= 16\n##$TE= 300.5\n##$D= (0..63)\n0 1.5 0\n0 0\n##$TD= 8000\n##$SW_h= 1000\n##XUNITS");
        var spectrum = Jcamp.Spectrum(text);
        var facts = spectrum.Facts;

        Assert.Equal(("DMSO", 16, 300.5), (facts.SolventLabel, facts.Scans, facts.TemperatureKelvin));
        Assert.Equal((1.5, 4.0), (facts.RelaxationDelaySeconds, facts.AcquisitionTimeSeconds));
        Assert.Equal(["$SOLVENT", "$TD", "$D", "$NS", "$TE"], spectrum.Warnings.Where(w => w.Label.StartsWith('$')).Select(w => w.Label));
        Assert.Equal(7, spectrum.Warnings[0].Line);
    }

    [Theory]
    [InlineData("##NPOINTS= 12.000000000", 0)]
    [InlineData("##NPOINTS= 13\n##DELTAX= -100", 1)]
    [InlineData("##NPOINTS= 11\n##DELTAX= -100.0001", 1)]
    public void A_count_of_points_may_be_decimal_and_off_by_one_where_the_axis_confirms_the_table(string count, int warnings)
    {
        var spectrum = Jcamp.Spectrum(Jcamp.Mini.With("##NPOINTS= 12", count));

        Assert.Equal(12, spectrum.Real.Length);
        Assert.Equal(-1, spectrum.PpmPerPoint, 12);
        Assert.Equal(warnings, spectrum.Warnings.Count(w => w.Label == "NPOINTS"));
    }

    [Theory]
    [InlineData("##NPOINTS= 12", "##NPOINTS= 13", "NPOINTS", "13 ordinates")]
    [InlineData("##NPOINTS= 12", "##NPOINTS= 14\n##DELTAX= -100", "NPOINTS", "14 ordinates")]
    [InlineData("##NPOINTS= 12", "##NPOINTS= 12.5", "NPOINTS", "whole number")]
    [InlineData("##NPOINTS= 12", "##NPOINTS= 12\n##NPOINTS= 13", "NPOINTS", "one value")]
    [InlineData("##NPOINTS= 12\n", "", "NPOINTS", "##NPOINTS=")]
    [InlineData("##FIRSTX= 1100", "##FIRSTX= 1100,5", "FIRSTX", "decimal commas")]
    [InlineData("##FIRSTX= 1100", "##FIRSTX= NaN", "FIRSTX", "decimal point")]
    [InlineData("##FIRSTX= 1100", "##FIRSTX= 1e999", "FIRSTX", "decimal point")]
    [InlineData("##FIRSTX= 1100", "##FIRSTX= 0", "NPOINTS", "different")]
    [InlineData("##YFACTOR= 0.5", "##YFACTOR= 0", "XYDATA", "factor")]
    [InlineData("##YFACTOR= 0.5", "##YFACTOR= 1e308", "XYDATA", "finite")]
    [InlineData("##.OBSERVE FREQUENCY= 100.0\n", "", ".OBSERVEFREQUENCY", "##.OBSERVEFREQUENCY=")]
    [InlineData("##.OBSERVE FREQUENCY= 100.0", "##.OBSERVE FREQUENCY= 0", ".OBSERVEFREQUENCY", "MHz")]
    [InlineData("##.OBSERVE NUCLEUS= ^1H\n", "", ".OBSERVENUCLEUS", "isotope")]
    [InlineData("##.OBSERVE NUCLEUS= ^1H", "##.OBSERVE NUCLEUS= proton", ".OBSERVENUCLEUS", "isotope")]
    [InlineData("##XYDATA= (X++(Y..Y))", "##XYDATA= (Y..Y)", "XYDATA", "X++")]
    [InlineData("##DATA TYPE= NMR SPECTRUM", "##DATA TYPE= NMR PEAK TABLE", "DATATYPE", "NMR SPECTRUM or NMR FID")]
    [InlineData("##DATA TYPE= NMR SPECTRUM", "##DATA TYPE= INFRARED SPECTRUM", "DATATYPE", "NMR SPECTRUM or NMR FID")]
    [InlineData("##DATA TYPE= NMR SPECTRUM", "##DATA TYPE= NMR SPECTRUM\n##NUM DIM= 2", "NUMDIM", "1")]
    [InlineData("##XYDATA= (X++(Y..Y))", "##PEAK TABLE= (XY..XY)", "DATATYPE", "NMR SPECTRUM or NMR FID")]
    public void What_could_change_a_number_is_an_error_that_names_the_label(string old, string replacement, string label, string expected)
    {
        var error = Jcamp.Error(Jcamp.Mini.With(old, replacement));

        Assert.Equal(label, error.Label);
        Assert.Contains(expected, error.Expected, StringComparison.Ordinal);
        Assert.Contains(label, error.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void An_observe_frequency_in_Hz_is_recognised_and_noted()
    {
        var spectrum = Jcamp.Spectrum(Jcamp.Mini.With("FREQUENCY= 100.0", "FREQUENCY= 100000000"));

        Assert.Equal(100, spectrum.Facts.ObserveFrequencyMHz);
        Assert.Contains(spectrum.Warnings, w => w.Label == ".OBSERVEFREQUENCY" && w.Line == 5);
    }

    [Fact]
    public void A_first_ordinate_that_disagrees_is_noted() =>
        Assert.Contains(Jcamp.Spectrum(Jcamp.Mini.With("FIRSTY= 50", "FIRSTY= 51")).Warnings, w => w.Label == "FIRSTY");
}
