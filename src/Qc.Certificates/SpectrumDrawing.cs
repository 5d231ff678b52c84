using System.Globalization;
using PdfSharp.Drawing;

namespace Qc.Certificates;

/// <summary>
/// Draws measured, modelled and left-over curve as vectors, one below the other, on one intensity scale, ppm from right to
/// left. Each column of the drawing keeps the lowest and the highest of its points, so that no line is lost to decimation.
/// </summary>
internal static class SpectrumDrawing
{
    /// <summary>Columns of the drawing; each gives two vertices.</summary>
    public const int Columns = 750;

    private const double CurveHeight = 92;
    private const double LeftOverHeight = 36;

    /// <summary>Draws the curves at the sheet's place.</summary>
    public static void Draw(Sheet sheet, CertificateTrace trace)
    {
        double height = (2 * CurveHeight) + LeftOverHeight + 34;
        sheet.Need(height);
        double top = sheet.Y;
        float peak = Math.Max(trace.Measured.Max(), trace.Modelled.Max());
        double scale = peak > 0 ? (CurveHeight - 12) / peak : 1;
        double measured = top + CurveHeight;
        double modelled = measured + CurveHeight;
        double leftOver = modelled + (LeftOverHeight / 2) + 6;
        Curve(sheet, trace.Measured, measured, scale, top, 0.5, "measured");
        Curve(sheet, trace.Modelled, modelled, scale, measured, 0.5, "modelled");
        Curve(sheet, trace.LeftOver, leftOver, scale, modelled, 0.5, "left over");
        Axis(sheet, trace, leftOver + (LeftOverHeight / 2));
        sheet.Y = top + height;
    }

    /// <summary>Lowest and highest point of each column, as (column, low, high) from left to right.</summary>
    public static IReadOnlyList<(double Place, float Low, float High)> Decimate(float[] points, int columns)
    {
        var kept = new List<(double, float, float)>(columns);
        int count = Math.Min(columns, points.Length);
        for (int c = 0; c < count; c++)
        {
            int from = (int)((long)c * points.Length / count);
            int to = (int)((long)(c + 1) * points.Length / count);
            ReadOnlySpan<float> part = points.AsSpan(from, to - from);
            float low = part[0];
            float high = part[0];
            foreach (float value in part)
            {
                low = Math.Min(low, value);
                high = Math.Max(high, value);
            }

            kept.Add(((c + 0.5) / count, low, high));
        }

        return kept;
    }

    private static void Curve(Sheet sheet, float[] points, double baseline, double scale, double ceiling, double pen, string name)
    {
        var vertices = new List<XPoint>(2 * Columns);
        bool up = true;
        foreach ((double place, float low, float high) in Decimate(points, Columns))
        {
            double x = Sheet.Margin + (place * Sheet.Width);
            vertices.Add(new XPoint(x, baseline - (scale * (up ? low : high))));
            vertices.Add(new XPoint(x, baseline - (scale * (up ? high : low))));
            up = !up;
        }

        XGraphicsState state = sheet.Graphics.Save();
        sheet.Graphics.IntersectClip(new XRect(Sheet.Margin, ceiling, Sheet.Width, baseline - ceiling + (LeftOverHeight / 2)));
        sheet.Graphics.DrawLines(new XPen(XColors.Black, pen) { LineJoin = XLineJoin.Round }, [.. vertices]);
        sheet.Graphics.Restore(state);
        sheet.Graphics.DrawString(name, CertificateFonts.Italic(8), XBrushes.Black, Sheet.Margin, ceiling + 12);
    }

    private static void Axis(Sheet sheet, CertificateTrace trace, double y)
    {
        XFont font = CertificateFonts.Regular(7.5);
        var pen = new XPen(XColors.Black, 0.4);
        double last = trace.FirstPpm + (trace.PpmPerPoint * trace.Measured.Length);
        double range = trace.FirstPpm - last;
        double step = new[] { 0.05, 0.1, 0.2, 0.5, 1, 2, 5, 10, 50 }.First(s => s >= range / 16 || s == 50);
        sheet.Graphics.DrawLine(pen, Sheet.Margin, y, Sheet.Margin + Sheet.Width, y);
        for (double mark = Math.Ceiling(last / step); mark * step <= trace.FirstPpm; mark++)
        {
            double ppm = mark == 0 ? 0 : mark * step; // No "-0".
            double x = Sheet.Margin + ((trace.FirstPpm - ppm) / range * Sheet.Width);
            string text = ppm.ToString(step < 0.1 ? "0.00" : step < 1 ? "0.0" : "0", CultureInfo.InvariantCulture);
            sheet.Graphics.DrawLine(pen, x, y, x, y + 3);
            sheet.Graphics.DrawString(text, font, XBrushes.Black, new XPoint(x, y + 11), XStringFormats.BaseLineCenter);
        }

        sheet.Graphics.DrawString(
            "chemical shift in ppm; one intensity scale for all three curves", CertificateFonts.Italic(7.5), XBrushes.Black,
            new XPoint(Sheet.Margin + (Sheet.Width / 2), y + 21), XStringFormats.BaseLineCenter);
    }
}
