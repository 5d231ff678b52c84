using System.Xml;
using static System.FormattableString;

namespace Qc.Engine.Reading.NmrMl;

/// <summary>One base64 array of an nmrML file with the attributes that tell how to unfold it.</summary>
internal sealed record NmrMlArray(string Element, int Line, string ByteFormat, string Compressed, string EncodedLength, string Text)
{
    /// <summary>Attribute numberOfDataPoints of the surrounding element.</summary>
    public string StatedPoints { get; init; } = "";

    /// <summary>Axis of a spectrum: start, end, unit; empty for an FID.</summary>
    public (string Start, string End, string Unit) Axis { get; init; } = ("", "", "");
}

/// <summary>
/// The elements of an nmrML file (version 1.0) that reading needs. The XML is streamed; document type declarations are
/// prohibited, so that nothing is fetched and no entity expands.
/// </summary>
internal sealed class NmrMlDocument
{
    private static readonly string[] s_valued =
    [
        "sampleAcquisitionTemperature", "relaxationDelay", "groupDelay", "sweepWidth", "irradiationFrequency",
        "effectiveExcitationField",
    ];

    private string _points = "";

    /// <summary>Value and unit of the acquisition's parameters, by element name.</summary>
    public Dictionary<string, (string Value, string Unit, int Line)> Parameters { get; } = new(StringComparer.Ordinal);

    /// <summary>FIDs and spectra, in file order.</summary>
    public List<NmrMlArray> Arrays { get; } = [];

    /// <summary>Whether there was an element for more than one dimension.</summary>
    public bool HasMoreDimensions { get; private set; }

    public static bool TryRead(ReadOnlyMemory<byte> content, ReadingLog log, out NmrMlDocument document)
    {
        document = new NmrMlDocument();
        var settings = new XmlReaderSettings
        {
            DtdProcessing = DtdProcessing.Prohibit,
            XmlResolver = null,
            IgnoreComments = true,
            IgnoreProcessingInstructions = true,
        };
        try
        {
            using var stream = new MemoryStream(content.ToArray(), writable: false);
            using var xml = XmlReader.Create(stream, settings);
            return document.TryRead(xml, log);
        }
        catch (XmlException problem)
        {
            return log.Fail("", problem.LineNumber, "well-formed XML without a document type", "The XML cannot be read");
        }
    }

    private bool TryRead(XmlReader xml, ReadingLog log)
    {
        var isRoot = true;
        while (!xml.EOF)
        {
            if (xml.NodeType != XmlNodeType.Element)
            {
                xml.Read();
                continue;
            }

            if (xml.Depth > log.Limits.MaxNesting)
            {
                return log.Fail(
                    xml.LocalName, LineOf(xml), Invariant($"at most {log.Limits.MaxNesting} levels"), "Elements are nested too deeply");
            }

            if (isRoot && xml.LocalName != "nmrML")
            {
                return log.Fail(Short(xml.LocalName), LineOf(xml), "the element nmrML", "The document has another root");
            }

            isRoot = false;
            if (xml.LocalName is "fidData" or "spectrumDataArray")
            {
                if (Arrays.Count > log.Limits.MaxNesting)
                {
                    return log.Fail(xml.LocalName, LineOf(xml), "fewer arrays", "The file has too many arrays");
                }

                Arrays.Add(ArrayOf(xml));
                continue;
            }

            Take(xml);
            xml.Read();
        }

        return true;
    }

    private void Take(XmlReader xml)
    {
        var name = xml.LocalName;
        switch (name)
        {
            case "acquisitionMultiD" or "spectrumMultiD":
                HasMoreDimensions = true;
                break;
            case "DirectDimensionParameterSet" or "spectrum1D":
                _points = Attribute(xml, "numberOfDataPoints");
                break;
            case "acquisitionParameterSet":
                Keep("numberOfScans", Attribute(xml, "numberOfScans"), "", xml);
                break;
            case "acquisitionNucleus" or "solvent":
                Keep(name, Attribute(xml, "name"), "", xml);
                break;
            case "fieldFrequencyLock":
                Keep(name, Attribute(xml, "fieldFrequencyLockName"), "", xml);
                break;
            case "xAxis" when Arrays.Count > 0 && Arrays[^1].Element == "spectrumDataArray":
                Arrays[^1] = Arrays[^1] with
                {
                    Axis = (Attribute(xml, "startValue"), Attribute(xml, "endValue"), Attribute(xml, "unitName")),
                };
                break;
            default:
                if (s_valued.Contains(name))
                {
                    Keep(name, Attribute(xml, "value"), Attribute(xml, "unitName"), xml);
                }

                break;
        }
    }

    private NmrMlArray ArrayOf(XmlReader xml)
    {
        var array = new NmrMlArray(
            xml.LocalName,
            LineOf(xml),
            Attribute(xml, "byteFormat"),
            Attribute(xml, "compressed"),
            Attribute(xml, "encodedLength"),
            "")
        {
            StatedPoints = _points,
        };
        return array with { Text = xml.ReadElementContentAsString() };
    }

    private void Keep(string name, string value, string unit, XmlReader xml) =>
        Parameters.TryAdd(name, (value.Trim(), unit.Trim(), LineOf(xml)));

    private static string Attribute(XmlReader xml, string name) => xml.GetAttribute(name) ?? "";

    private static string Short(string name) => name.Length <= 40 ? name : name[..40];

    private static int LineOf(XmlReader xml) => ((IXmlLineInfo)xml).LineNumber;
}
