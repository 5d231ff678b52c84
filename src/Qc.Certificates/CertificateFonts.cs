using PdfSharp.Drawing;
using PdfSharp.Fonts;
using PdfSharp.Pdf;

namespace Qc.Certificates;

/// <summary>The three faces of Source Sans 3 that certificates use, from the assembly: no font of the machine is asked for.</summary>
internal sealed class CertificateFonts : IFontResolver
{
    private const string Family = "Source Sans 3";
    private static readonly Lock Gate = new();
    private static readonly Dictionary<string, byte[]> Faces = new[] { "Regular", "Semibold", "Italic" }.ToDictionary(f => f, Read);

    /// <summary>Which characters the regular face has. The other two faces of the family have the same ones.</summary>
    public static FontCoverage Coverage { get; } = FontCoverage.Of(Faces["Regular"]);

    /// <summary>Regular face.</summary>
    public static XFont Regular(double size) => Font(size, XFontStyleEx.Regular);

    /// <summary>Semibold face.</summary>
    public static XFont Semibold(double size) => Font(size, XFontStyleEx.Bold);

    /// <summary>Italic face.</summary>
    public static XFont Italic(double size) => Font(size, XFontStyleEx.Italic);

    /// <summary>Face name of a style.</summary>
    public FontResolverInfo? ResolveTypeface(string familyName, bool bold, bool italic) =>
        familyName == Family ? new FontResolverInfo(bold ? "Semibold" : italic ? "Italic" : "Regular") : null;

    /// <summary>Bytes of a face.</summary>
    public byte[]? GetFont(string faceName) => Faces.GetValueOrDefault(faceName);

    private static XFont Font(double size, XFontStyleEx style)
    {
        lock (Gate)
        {
            // The library keeps one resolver for the process.
            GlobalFontSettings.FontResolver ??= new CertificateFonts();
        }

        return new XFont(Family, size, style, new XPdfFontOptions(PdfFontEncoding.Unicode));
    }

    private static byte[] Read(string face)
    {
        using Stream stream = typeof(CertificateFonts).Assembly.GetManifestResourceStream(face + ".ttf")
            ?? throw new InvalidOperationException($"The font {face} is not in the assembly.");
        using var bytes = new MemoryStream();
        stream.CopyTo(bytes);
        return bytes.ToArray();
    }
}
