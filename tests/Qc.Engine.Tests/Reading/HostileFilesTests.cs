using System.Diagnostics;
using System.Text;
using Qc.Engine.Reading;
using Xunit;

namespace Qc.Engine.Tests.Reading;

/// <summary>Files made to cost much: the answer comes in linear time and within the memory that <see cref="ReadingLimits"/> states.</summary>
public class HostileFilesTests
{
    private const int Bytes = 4 * 1024 * 1024;

    private static readonly ReadingLimits s_limits = new() { MaxPoints = 500_000, MaxRecords = 5_000 };

    // Linear work takes well under a second; quadratic work on four million bytes would take hours.
    private static readonly TimeSpan s_limit = TimeSpan.FromSeconds(60);

    public static TheoryData<string, SpectrumFormat, string, string> Files() => new()
    {
        { "lines without ordinates", SpectrumFormat.JcampDx, Table("0\n"), "NPOINTS" },
        { "empty lines", SpectrumFormat.JcampDx, Table("\n"), "NPOINTS" },
        { "one ordinate a line", SpectrumFormat.JcampDx, Table("0A\n"), "XYDATA" },
        { "packed ordinates", SpectrumFormat.JcampDx, Table("0AJJJJJJJJJJJJJJJJJJJJJJJJJJJJJJJJJ\n"), "XYDATA" },
        { "a huge repeat count", SpectrumFormat.JcampDx, Table("0AZ99999999\n"), "XYDATA" },
        { "labels without values", SpectrumFormat.JcampDx, Repeat("##A=\n"), "" },
        { "titles", SpectrumFormat.JcampDx, Repeat("##TITLE=\n"), "" },
        { "links", SpectrumFormat.JcampDx, Repeat("##TITLE=\n##DATATYPE=LINK\n"), "" },
        { "one long line", SpectrumFormat.JcampDx, "##TITLE= " + Repeat("x"), "" },
        { "pairs", SpectrumFormat.JcampDx, Table("0 1\n").With("##XYDATA= (X++(Y..Y))", "##XYPOINTS= (XY..XY)"), "XYPOINTS" },
        { "a long text", SpectrumFormat.JcampDx, "##TITLE= x\n##$A=\n" + Repeat("text text text\n") + "##END=\n", "DATATYPE" },
        { "comma lists", SpectrumFormat.JcampDx, Jcamp.MiniFid.With("##VAR_DIM= 4", "##VAR_DIM= " + Repeat(",\n")), "VARDIM" },
        { "rows of points", SpectrumFormat.Csv, "# frequencyMHz= 400\n" + Repeat("1,1\n"), "CSV" },
        { "elements", SpectrumFormat.NmrMl, "<nmrML>" + Repeat("<a/>") + "</nmrML>", "fidData" },
        { "open elements", SpectrumFormat.NmrMl, "<nmrML>" + Repeat("<a>"), "a" },
        { "base64 without end", SpectrumFormat.NmrMl, NmrMl.File("<fidData byteFormat=\"complex128\">" + Repeat("AAAA") + "</fidData>", ""), "fidData" },
    };

    [Theory]
    [MemberData(nameof(Files))]
    public void A_hostile_file_is_rejected_soon_and_within_the_memory_stated(string what, SpectrumFormat format, string text, string label)
    {
        var content = Encoding.ASCII.GetBytes(text);
        var before = GC.GetAllocatedBytesForCurrentThread();
        var watch = Stopwatch.StartNew();

        var result = MeasurementReader.Read(format, content, s_limits);

        var allocated = GC.GetAllocatedBytesForCurrentThread() - before;
        Assert.True(result.Error is { } error && error.Label == label, $"{what}: {result.Error?.Message}");
        Assert.InRange(watch.Elapsed, TimeSpan.Zero, s_limit);
        Assert.InRange(allocated, 0, (40L * content.Length) + (64L * s_limits.MaxPoints) + (1000L * s_limits.MaxRecords));
    }

    private static string Table(string line) => Jcamp.WithTable(Repeat(line), 400_000);

    private static string Repeat(string text) => new StringBuilder().Insert(0, text, Bytes / text.Length).ToString();
}
