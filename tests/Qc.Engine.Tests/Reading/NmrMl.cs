using System.IO.Compression;
using System.Text;
using Qc.Engine.Reading;

namespace Qc.Engine.Tests.Reading;

/// <summary>Small nmrML files for tests; elements as in nmrML 1.0.</summary>
internal static class NmrMl
{
    public static string File(string fid, string spectrum) => $"""
        <?xml version="1.0" encoding="UTF-8"?>
        <nmrML xmlns="http://nmrml.org/schema" version="1.0.rc1">
          <acquisition><acquisition1D>
            <acquisitionParameterSet numberOfScans="64">
              <sampleAcquisitionTemperature value="302.70" unitName="kelvin"/>
              <relaxationDelay value="25.0" unitName="second"/>
              <groupDelay value="2.5" unitName="dimensionless"/>
              <DirectDimensionParameterSet numberOfDataPoints="8">
                <acquisitionNucleus cvRef="CHEBI" name="hydrogen atom"/>
                <effectiveExcitationField value="500.0" unitName="megaHertz"/>
                <sweepWidth value="6000.0" unitName="hertz"/>
                <irradiationFrequency value="500.0025" unitName="megaHertz"/>
              </DirectDimensionParameterSet>
            </acquisitionParameterSet>
            {fid}
          </acquisition1D></acquisition>
          <spectrumList><spectrum1D numberOfDataPoints="4">
            {spectrum}
            <xAxis unitName="parts per million" startValue="11" endValue="2"/>
          </spectrum1D></spectrumList>
        </nmrML>
        """;

    public static string Array(string element, string format, byte[] bytes, bool isCompressed = true)
    {
        var text = Convert.ToBase64String(isCompressed ? Deflate(bytes) : bytes, Base64FormattingOptions.InsertLineBreaks);
        return $"<{element} compressed=\"{(isCompressed ? "true" : "false")}\" byteFormat=\"{format}\">{text}</{element}>";
    }

    public static byte[] Doubles(params double[] values) => [.. values.SelectMany(BitConverter.GetBytes)];

    public static byte[] Singles(params float[] values) => [.. values.SelectMany(BitConverter.GetBytes)];

    public static byte[] Integers(params int[] values) => [.. values.SelectMany(BitConverter.GetBytes)];

    public static ReadingResult Read(string text, ReadingLimits? limits = null) =>
        MeasurementReader.Read(SpectrumFormat.NmrMl, Encoding.UTF8.GetBytes(text), limits);

    private static byte[] Deflate(byte[] bytes)
    {
        using var packed = new MemoryStream();
        using (var zlib = new ZLibStream(packed, CompressionLevel.Optimal))
        {
            zlib.Write(bytes);
        }

        return packed.ToArray();
    }
}
