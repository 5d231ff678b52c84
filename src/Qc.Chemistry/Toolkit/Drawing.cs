using System.Globalization;
using System.Text;
using System.Text.Json;
using System.Xml;
using System.Xml.Linq;

namespace Qc.Chemistry.Toolkit;

/// <summary>Asks for a drawing and cleans it for a page: numbers from 1, no background, lines in the page's ink.</summary>
internal static class Drawing
{
    private static readonly XNamespace Svg = "http://www.w3.org/2000/svg";

    private static readonly HashSet<string> DrawingElements = ["svg", "g", "path", "rect", "circle", "ellipse", "line", "polyline", "polygon", "text", "tspan"];

    private static readonly HashSet<string> DrawingAttributes =
    [
        "version", "width", "height", "viewBox", "class", "d", "x", "y", "cx", "cy", "r", "rx", "ry", "x1", "y1", "x2", "y2",
        "points", "style", "fill", "stroke", "stroke-width", "opacity", "transform", "text-anchor", "font-size",
    ];

    /// <summary>The SMILES with a note on each atom: its number from 1 (a SMILES extension the toolkit draws).</summary>
    public static string WithNumbers(string smiles, int atoms)
    {
        var notes = new StringBuilder(smiles).Append(" |atomProp");
        for (int i = 0; i < atoms; i++)
        {
            notes.Append(CultureInfo.InvariantCulture, $":{i}.atomNote.{i + 1}");
        }

        return notes.Append('|').ToString();
    }

    /// <summary>Drawing options as the toolkit takes them.</summary>
    public static string Details(int widthPixels, int heightPixels) => JsonSerializer.Serialize(new Dictionary<string, object>
    {
        ["width"] = widthPixels,
        ["height"] = heightPixels,
        ["clearBackground"] = false,
        ["annotationFontScale"] = 0.6,
    });

    /// <summary>
    /// Keeps shapes and text only: no script, style sheet, link, event or foreign element can pass.
    /// Black becomes currentColor, so the drawing follows light and dark pages.
    /// </summary>
    public static string Clean(string svg, int widthPixels, int heightPixels)
    {
        using var reader = XmlReader.Create(
            new StringReader(svg),
            new XmlReaderSettings { DtdProcessing = DtdProcessing.Prohibit, XmlResolver = null, IgnoreComments = true, IgnoreProcessingInstructions = true });
        XElement root = Copy(XElement.Load(reader));
        root.SetAttributeValue("width", widthPixels);
        root.SetAttributeValue("height", heightPixels);
        return root.ToString(SaveOptions.DisableFormatting);
    }

    private static XElement Copy(XElement element)
    {
        var copy = new XElement(Svg + element.Name.LocalName);
        foreach (XAttribute attribute in element.Attributes())
        {
            if (!attribute.IsNamespaceDeclaration && attribute.Name.Namespace == XNamespace.None
                && DrawingAttributes.Contains(attribute.Name.LocalName) && !attribute.Value.Contains("url(", StringComparison.OrdinalIgnoreCase))
            {
                copy.SetAttributeValue(attribute.Name.LocalName, InPageInk(attribute.Value));
            }
        }

        foreach (XNode node in element.Nodes())
        {
            if (node is XElement child && child.Name.Namespace == Svg && DrawingElements.Contains(child.Name.LocalName))
            {
                copy.Add(Copy(child));
            }
            else if (node is XText text && element.Name.LocalName is ("text" or "tspan"))
            {
                copy.Add(new XText(text.Value));
            }
        }

        return copy;
    }

    private static string InPageInk(string value) => value.Replace("#000000", "currentColor", StringComparison.OrdinalIgnoreCase);
}
