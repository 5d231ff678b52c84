using System.Text;
using Qc.Engine.Reading;
using Xunit;

namespace Qc.Engine.Tests.Reading;

/// <summary>Damaged files: whatever the bytes, reading gives measurements that hold together, or an error; never an exception.</summary>
public class ReadingFuzzTests
{
    private const int InputsPerFile = 10_000;

    private static readonly ReadingLimits s_small = new() { MaxPoints = 5000 };

    private static readonly string s_nmrMl = NmrMl.File(
        NmrMl.Array("fidData", "Complex128", NmrMl.Doubles(1, -1, 2, -2, 3, -3, 4, -4)),
        NmrMl.Array("spectrumDataArray", "float64", NmrMl.Doubles(5, 6, 7, 8), isCompressed: false));

    private static readonly string s_link =
        "##TITLE= link\n##DATA TYPE= LINK\n##BLOCKS= 2\n" + Jcamp.MiniFid + "\n" + Jcamp.Mini + "\n##END=\n";

    private static readonly string s_pairs = Jcamp.WithTable("300, 1; 200, 2\n100,3 0,4", 4, 300)
        .With("##XYDATA= (X++(Y..Y))", "##XYPOINTS= (XY..XY)").With("##XUNITS", "##.SHIFT REFERENCE= INTERNAL, TMS, 1, 9.5\n##DELTAX= -100\n##XUNITS");

    // Pieces that mean something to a reader do more damage than random bytes.
    private static readonly string[] s_pieces =
    [
        "##", "$$", "\n", "\r", "=", ",", "##END=\n", "##TITLE= x\n", "##NPOINTS= 1e9\n", "Z99999999", "NaN", "1e999", "-", "%", "@", "E+5", "s", "(", ")",
        "0", "9999999999999999999", "\0", "\u00B0", "<", ">", "\"", "##DATA TYPE= LINK\n", "##NTUPLES= x\n", "##PAGE= N=1\n", "A", "j", "PPM", "HZ", "SECONDS",
    ];

    public static TheoryData<SpectrumFormat, string> Corpus() => new()
    {
        { SpectrumFormat.JcampDx, Jcamp.Mini },
        { SpectrumFormat.JcampDx, s_link },
        { SpectrumFormat.JcampDx, s_pairs },
        { SpectrumFormat.NmrMl, s_nmrMl },
        { SpectrumFormat.Csv, "# frequencyMHz= 400\n# nucleus= 1H\nppm,intensity\n10.5,1\n9.5,2e3\n8.5,-3\n" },
    };

    [Theory]
    [MemberData(nameof(Corpus))]
    public void A_damaged_file_never_escapes_as_an_exception(SpectrumFormat format, string text)
    {
        var original = Encoding.Latin1.GetBytes(text);
        var random = new Random(20261201);
        var (read, rejected) = (0, 0);
        for (var i = 0; i < InputsPerFile; i++)
        {
            var result = MeasurementReader.Read(format, Damage(original, random), s_small);
            if (result.Error is { } error)
            {
                rejected++;
                Assert.Empty(result.Measurements);
                Assert.NotEqual("", error.Message);
            }
            else
            {
                read++;
                Assert.All(result.Measurements, HoldsTogether);
            }
        }

        Assert.True(read > 100 && rejected > 100, $"{read} read, {rejected} rejected: the damage is too mild or too great.");
    }

    private static void HoldsTogether(Measurement measurement)
    {
        var (real, imaginary) = measurement switch
        {
            SpectrumMeasurement s => (s.Real, s.Imaginary ?? s.Real),
            FidMeasurement f => (f.Real, f.Imaginary),
            _ => throw new InvalidOperationException("a third kind of measurement"),
        };
        Assert.Equal(real.Length, imaginary.Length);
        Assert.True(real.Length >= 2 && real.Concat(imaginary).All(double.IsFinite));
        Assert.True(measurement is not SpectrumMeasurement spectrum || (spectrum.PpmPerPoint < 0 && double.IsFinite(spectrum.FirstPpm)));
        Assert.True(measurement is not FidMeasurement fid || fid.DwellSeconds > 0);
        Assert.InRange(measurement.Facts.ObserveFrequencyMHz, 1, 3000);
    }

    private static byte[] Damage(byte[] original, Random random)
    {
        var bytes = new List<byte>(original);
        for (var times = random.Next(1, 4); times > 0; times--)
        {
            var at = random.Next(bytes.Count);
            var length = Math.Min(random.Next(1, 30), bytes.Count - at);
            switch (random.Next(6))
            {
                case 0:
                    bytes[at] = (byte)random.Next(256);
                    break;
                case 1:
                    bytes.RemoveRange(at, length);
                    break;
                case 2:
                    bytes.InsertRange(at, bytes.GetRange(at, length));
                    break;
                case 3:
                    bytes.InsertRange(at, Encoding.Latin1.GetBytes(s_pieces[random.Next(s_pieces.Length)]));
                    break;
                case 4:
                    var piece = Encoding.Latin1.GetBytes(s_pieces[random.Next(s_pieces.Length)]);
                    bytes.RemoveRange(at, Math.Min(piece.Length, bytes.Count - at));
                    bytes.InsertRange(at, piece);
                    break;
                default:
                    bytes[at] ^= (byte)(1 << random.Next(8));
                    break;
            }

            if (bytes.Count == 0)
            {
                return [];
            }
        }

        return [.. bytes];
    }
}
