using Qc.Engine.Reading;
using Xunit;

namespace Qc.Engine.Tests.Reading;

/// <summary>Compound files and what is around the blocks.</summary>
public class JcampBlockTests
{
    private const string Structure = "##TITLE= s\n##JCAMP-CS= 3.7\n##DATA TYPE= CHEMICAL STRUCTURE\n##END=\n";
    private const string Peaks = "##TITLE= p\n##DATA TYPE= NMR PEAK TABLE\n##PEAK TABLE= (XY..XY)\n1, 2\n##END=\n";

    [Fact]
    public void A_compound_file_gives_every_measurement_in_its_order_and_notes_the_rest()
    {
        var plane = Jcamp.Mini.With("NMR SPECTRUM", "nD NMR SPECTRUM\n##NUM DIM= 2") + "\n";
        var result = Jcamp.Read(Link(4, Structure, Jcamp.MiniFid + "\n", Peaks, plane, Link(1, Jcamp.Mini + "\n")));

        Assert.Null(result.Error);
        Assert.Collection(
            result.Measurements, m => Assert.IsType<FidMeasurement>(m), m => Assert.IsType<SpectrumMeasurement>(m));
        Assert.All(result.Measurements, m => Assert.Equal(3, m.Warnings.Count(w => w.Label == "DATATYPE")));
        Assert.Equal("mini", result.Measurements[1].Facts.Title);
    }

    [Fact]
    public void An_error_in_one_block_rejects_the_file()
    {
        var result = Jcamp.Read(Link(2, Jcamp.MiniFid + "\n", Jcamp.Mini.With("300c", "300b") + "\n"));

        Assert.Equal("XYDATA", result.Error!.Label);
        Assert.Empty(result.Measurements);
    }

    [Fact]
    public void Missing_ends_and_stray_labels_are_departures()
    {
        Assert.Contains(Jcamp.Spectrum(Jcamp.Mini.With("##END=", "")).Warnings, w => w.Label == "END");
        Assert.Contains(Jcamp.Spectrum(Jcamp.Mini + "\n##END=\n").Warnings, w => w.Label == "END");
        Assert.Contains(Jcamp.Spectrum(Jcamp.Mini + "\n##OWNER= x\n").Warnings, w => w.Label == "OWNER");
        Assert.Contains(Jcamp.Spectrum(Jcamp.Mini.With("##TITLE= mini\n", "")).Warnings, w => w.Label == "JCAMPDX");

        var two = Jcamp.Read(Jcamp.Mini.With("##END=", "") + Jcamp.MiniFid);
        Assert.Equal(2, two.Measurements.Length);
        Assert.Contains(two.Measurements[0].Warnings, w => w.Label == "END" && w.Line == 18);
    }

    [Fact]
    public void A_wrong_count_of_blocks_is_a_departure()
    {
        var inner = new[] { Jcamp.Mini + "\n", Jcamp.MiniFid + "\n" };

        Assert.DoesNotContain(Jcamp.Read(Link(2, inner)).Measurements[0].Warnings, w => w.Label == "BLOCKS");
        Assert.Contains(Jcamp.Read(Link(3, inner)).Measurements[0].Warnings, w => w.Label == "BLOCKS" && w.Line == 4);
    }

    [Fact]
    public void A_cut_file_is_an_error_by_its_count_of_points() =>
        Assert.Equal("NPOINTS", Jcamp.Error(Jcamp.Mini[..Jcamp.Mini.IndexOf("jk49", StringComparison.Ordinal)]).Label);

    [Fact]
    public void A_file_without_any_measurement_is_an_error()
    {
        Assert.Equal("DATATYPE", Jcamp.Error(Link(1, Structure)).Label);
        Assert.Equal("DATATYPE", Jcamp.Error("##TITLE= only\n##END=\n").Label);
    }

    [Fact]
    public void Nesting_is_limited()
    {
        var text = Jcamp.Mini + "\n";
        for (var level = 0; level < 40; level++)
        {
            text = Link(1, text);
        }

        Assert.Contains("nested", Jcamp.Error(text).Message, StringComparison.Ordinal);
    }

    private static string Link(int blocks, params string[] inner) =>
        FormattableString.Invariant($"##TITLE= link\n##JCAMP-DX= 5.01\n##DATA TYPE= LINK\n##BLOCKS= {blocks}\n")
        + string.Concat(inner) + "##END=\n";
}
