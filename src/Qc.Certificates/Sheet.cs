using System.Globalization;
using System.Text;
using System.Text.RegularExpressions;
using PdfSharp;
using PdfSharp.Drawing;
using PdfSharp.Pdf;

namespace Qc.Certificates;

/// <summary>A column of a table.</summary>
/// <param name="Title">Title.</param>
/// <param name="Share">Share of the width; shares are relative.</param>
internal sealed record Column(string Title, double Share);

/// <summary>
/// A4 pages filled from top to bottom. Lengths in points (1/72 inch). Whatever is too long for a line is wrapped, whatever
/// is too long for a page goes on over the next: no text is cut off or drawn over another.
/// </summary>
internal sealed partial class Sheet(PdfDocument document)
{
    /// <summary>Left and right margin.</summary>
    public const double Margin = 50;

    /// <summary>Width between the margins.</summary>
    public const double Width = 595 - (2 * Margin);

    private const double Top = 64;
    private const double Bottom = 842 - 62;
    private const double Leading = 1.28;
    private static readonly XPen Hairline = new(XColors.Black, 0.4);
    private static readonly XPen Light = new(XColor.FromGrayScale(0.72), 0.4);
    private XGraphics? graphics;

    /// <summary>Where the next thing goes.</summary>
    public double Y { get; set; }

    /// <summary>Number of the page being drawn on, from 1.</summary>
    public int Page => document.PageCount;

    /// <summary>The page being drawn on.</summary>
    public XGraphics Graphics => graphics ?? throw new InvalidOperationException("No page was begun.");

    /// <summary>Begins a page where less than this height is left.</summary>
    public void Need(double height)
    {
        if (graphics is null || Y + height > Bottom)
        {
            graphics?.Dispose();
            PdfPage page = document.AddPage();
            page.Size = PageSize.A4;
            graphics = XGraphics.FromPdfPage(page);
            Y = Top;
        }
    }

    /// <summary>A heading that stays with what follows.</summary>
    public void Heading(string text, double follows = 40)
    {
        Need(26 + follows);
        Y += 10;
        XFont font = CertificateFonts.Semibold(10.5);
        Graphics.DrawString(text, font, XBrushes.Black, Margin, Y + 10);
        Y += 14;
        Graphics.DrawLine(Hairline, Margin, Y, Margin + Width, Y);
        Y += 4;
    }

    /// <summary>Wrapped text.</summary>
    public void Paragraph(string text, XFont font, double left = 0, double width = Width)
    {
        Need(font.Size * Leading);
        foreach (string line in Wrap(text, font, width - left))
        {
            Need(font.Size * Leading);
            Graphics.DrawString(line, font, XBrushes.Black, Margin + left, Y + font.Size);
            Y += font.Size * Leading;
        }
    }

    /// <summary>Names and values, one below the other.</summary>
    public void Fields(IEnumerable<(string Name, string Value)> fields, double width = Width, double nameWidth = 104)
    {
        XFont font = CertificateFonts.Regular(9);
        foreach ((string name, string value) in fields)
        {
            Need(font.Size * Leading);
            Graphics.DrawString(name, CertificateFonts.Regular(9), XBrushes.DimGray, Margin, Y + font.Size);
            Paragraph(value, font, nameWidth, width);
        }
    }

    /// <summary>A table; its titles are repeated on every page.</summary>
    public void Table(IReadOnlyList<Column> columns, IEnumerable<string[]> rows)
    {
        XFont font = CertificateFonts.Regular(8);
        double step = font.Size * Leading;
        double total = columns.Sum(c => c.Share);
        double[] widths = [.. columns.Select(c => c.Share / total * Width)];
        Titles(columns, widths);
        foreach (string[] row in rows)
        {
            string[][] cells = [.. row.Select((text, i) => Wrap(text, font, widths[i] - 6))];
            int height = cells.Max(c => c.Length);
            int done = 0;
            while (done < height)
            {
                // A row goes on over the page only where it is longer than a page's half; else it moves as a whole.
                int wanted = Math.Min(height - done, 30);
                if (Y + (wanted * step) + 5 > Bottom)
                {
                    Need(Bottom);
                    Titles(columns, widths);
                }

                int lines = Math.Min(height - done, (int)((Bottom - Y - 5) / step));
                double x = Margin;
                for (int c = 0; c < cells.Length; c++)
                {
                    for (int l = done; l < Math.Min(done + lines, cells[c].Length); l++)
                    {
                        Graphics.DrawString(cells[c][l], font, XBrushes.Black, x, Y + 2 + ((l - done) * step) + font.Size);
                    }

                    x += widths[c];
                }

                Y += (lines * step) + 5;
                done += lines;
                Graphics.DrawLine(Light, Margin, Y - 1, Margin + Width, Y - 1);
            }
        }
    }

    /// <summary>Ends the last page and writes head and foot on all, now that their number is known.</summary>
    public void Finish(string head, string foot)
    {
        graphics?.Dispose();
        graphics = null;
        XFont font = CertificateFonts.Regular(8);
        for (int i = 0; i < document.PageCount; i++)
        {
            using XGraphics page = XGraphics.FromPdfPage(document.Pages[i], XGraphicsPdfPageOptions.Append);
            string number = string.Create(CultureInfo.InvariantCulture, $"page {i + 1} of {document.PageCount}");
            page.DrawString(Fit(page, head, font), font, XBrushes.Black, Margin, 40);
            page.DrawLine(Hairline, Margin, 46, Margin + Width, 46);
            page.DrawLine(Hairline, Margin, 842 - 50, Margin + Width, 842 - 50);
            page.DrawString(Fit(page, foot, font), font, XBrushes.Black, Margin, 842 - 38);
            page.DrawString(number, font, XBrushes.Black, Margin + Width - page.MeasureString(number, font).Width, 842 - 38);
        }
    }

    /// <summary>Lines of a text no wider than given; words that are wider are broken.</summary>
    public string[] Wrap(string text, XFont font, double width)
    {
        var lines = new List<string>();
        var line = new StringBuilder();
        foreach (string word in CertificateFonts.Coverage.Visible(text).Split(' ', StringSplitOptions.RemoveEmptyEntries))
        {
            if (line.Length > 0 && Measure(line + " " + word, font) > width)
            {
                lines.Add(line.ToString());
                line.Clear();
            }

            line.Append(line.Length > 0 ? " " : "");
            if (Measure(line + word, font) <= width)
            {
                line.Append(word);
                continue;
            }

            foreach (string piece in Breaks().Split(word))
            {
                if (Measure(line + piece, font) <= width)
                {
                    line.Append(piece);
                }
                else
                {
                    Break(piece, font, width, lines, line);
                }
            }
        }

        lines.Add(line.ToString());
        return [.. lines];
    }

    /// <summary>A piece that does not fit goes on a line of its own; one that fits on none is broken anywhere.</summary>
    private void Break(string piece, XFont font, double width, List<string> lines, StringBuilder line)
    {
        bool fitsAlone = Measure(piece, font) <= width;
        foreach (string part in fitsAlone ? [piece] : piece.EnumerateRunes().Select(r => r.ToString()))
        {
            if (line.Length > 0 && Measure(line + part, font) > width)
            {
                lines.Add(line.ToString());
                line.Clear();
            }

            line.Append(part);
        }
    }

    /// <summary>Where a long word may be broken: after a dot, stroke or hyphen, and before a capital within a name.</summary>
    [GeneratedRegex("(?<=[./_-])(?=.)|(?<=[a-z])(?=[A-Z])")]
    private static partial Regex Breaks();

    private void Titles(IReadOnlyList<Column> columns, double[] widths)
    {
        XFont font = CertificateFonts.Semibold(8);
        Need(40);
        double x = Margin;
        for (int c = 0; c < columns.Count; c++)
        {
            Graphics.DrawString(columns[c].Title, font, XBrushes.Black, x, Y + 9);
            x += widths[c];
        }

        Y += 14;
        Graphics.DrawLine(Hairline, Margin, Y - 1, Margin + Width, Y - 1);
    }

    private double Measure(string text, XFont font) => Graphics.MeasureString(text, font).Width;

    private static string Fit(XGraphics page, string text, XFont font)
    {
        string visible = CertificateFonts.Coverage.Visible(text);
        int length = visible.Length;
        while (length > 0 && page.MeasureString(visible[..length] + "…", font).Width > Width - 70)
        {
            length--;
        }

        return length == visible.Length ? visible : visible[..length] + "…";
    }
}
