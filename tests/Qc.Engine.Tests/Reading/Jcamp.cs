using System.Text;
using Qc.Engine.Reading;
using Xunit;

namespace Qc.Engine.Tests.Reading;

/// <summary>Small JCAMP-DX files for tests.</summary>
internal static class Jcamp
{
    /// <summary>The worked example of CHECKVALUES 8.4, decoded there by hand.</summary>
    public const string Mini = """
        ##TITLE= mini
        ##JCAMP-DX= 5.01
        ##DATA TYPE= NMR SPECTRUM
        ##DATA CLASS= XYDATA
        ##.OBSERVE FREQUENCY= 100.0
        ##.OBSERVE NUCLEUS= ^1H
        ##XUNITS= HZ
        ##YUNITS= ARBITRARY UNITS
        ##XFACTOR= 1
        ##YFACTOR= 0.5
        ##FIRSTX= 1100
        ##LASTX= 0
        ##NPOINTS= 12
        ##FIRSTY= 50
        ##XYDATA= (X++(Y..Y))
        1100A00K%TLj08%U
        300cK53jk49
        ##END=
        """;

    /// <summary>The worked FID pages of CHECKVALUES 8.4.</summary>
    public const string MiniFid = """
        ##TITLE= mini fid
        ##JCAMP-DX= 5.01
        ##DATA TYPE= NMR FID
        ##DATA CLASS= NTUPLES
        ##.OBSERVE FREQUENCY= 100.0005
        ##.OBSERVE NUCLEUS= ^1H
        ##.ACQUISITION MODE= SIMULTANEOUS
        ##$SF= 100
        ##NTUPLES= NMR FID
        ##VAR_NAME= TIME, FID/REAL, FID/IMAG, PAGE NUMBER
        ##SYMBOL= X, R, I, N
        ##VAR_TYPE= INDEPENDENT, DEPENDENT, DEPENDENT, PAGE
        ##VAR_FORM= AFFN, ASDF, ASDF, AFFN
        ##VAR_DIM= 4, 4, 4, 2
        ##UNITS= SECONDS, ARBITRARY UNITS, ARBITRARY UNITS,
        ##FIRST= 0, 2000, 0, 1
        ##LAST= 0.0015, 0, -100, 2
        ##FACTOR= 0.0005, 2, 2, 1
        ##PAGE= N=1
        ##DATA TABLE= (X++(R..R)), XYDATA
        0A000n00p00K00
        3@
        ##PAGE= N=2
        ##DATA TABLE= (X++(I..I)), XYDATA
        0@Q00n00l50
        3e0
        ##END NTUPLES= NMR FID
        ##END=
        """;

    public static ReadingResult Read(string text) =>
        MeasurementReader.Read(SpectrumFormat.JcampDx, Encoding.Latin1.GetBytes(text));

    public static SpectrumMeasurement Spectrum(string text)
    {
        var result = Read(text);
        Assert.Null(result.Error);
        return Assert.IsType<SpectrumMeasurement>(Assert.Single(result.Measurements));
    }

    public static ReadingError Error(string text)
    {
        var result = Read(text);
        Assert.Empty(result.Measurements);
        return Assert.IsType<ReadingError>(result.Error);
    }

    /// <summary>The mini file with its table, and the labels that count points, replaced.</summary>
    public static string WithTable(string table, int points, double first = 1100, double last = 0)
    {
        var header = Mini[..Mini.IndexOf("1100A00", StringComparison.Ordinal)]
            .Replace("YFACTOR= 0.5", "YFACTOR= 1", StringComparison.Ordinal)
            .Replace("##FIRSTY= 50\n", "", StringComparison.Ordinal)
            .Replace("NPOINTS= 12", FormattableString.Invariant($"NPOINTS= {points}"), StringComparison.Ordinal)
            .Replace("FIRSTX= 1100", FormattableString.Invariant($"FIRSTX= {first}"), StringComparison.Ordinal)
            .Replace("LASTX= 0", FormattableString.Invariant($"LASTX= {last}"), StringComparison.Ordinal);
        return header + table + "\n##END=\n";
    }

    /// <summary>One replacement that must hit.</summary>
    public static string With(this string text, string old, string replacement)
    {
        Assert.Contains(old, text, StringComparison.Ordinal);
        return text.Replace(old, replacement, StringComparison.Ordinal);
    }
}
