using System.Globalization;
using PdfSharp.Drawing;
using PdfSharp.Pdf;
using Qc.Evidence;

namespace Qc.Certificates;

/// <summary>A rendered certificate with room for its signature. Only <see cref="CertificateRenderer"/> makes one.</summary>
public sealed class UnsignedCertificate
{
    internal UnsignedCertificate(byte[] bytes, DateTimeOffset issuedAt)
    {
        Bytes = bytes;
        IssuedAt = issuedAt;
    }

    /// <summary>When it is issued.</summary>
    public DateTimeOffset IssuedAt { get; }

    internal byte[] Bytes { get; }
}

/// <summary>Lays a certificate out on A4, black on white. What is printed is the content given; nothing is computed here.</summary>
public static class CertificateRenderer
{
    /// <summary>What every certificate says about the method.</summary>
    public static IReadOnlyList<string> StandingCautions { get; } =
    [
        "Proton NMR does not see inorganic salts, metals, water below its detection limit, or substances whose signals lie under others; this certificate does not exclude them.",
        "The verdict supports a decision of the laboratory's quality unit under its own procedures and the law that applies there. It does not replace licensed or qualified persons.",
    ];

    /// <summary>Renders a certificate and uses the release up.</summary>
    /// <exception cref="InvalidOperationException">The release was used before, or is for another lot or report.</exception>
    /// <exception cref="ArgumentException">The curves differ in length, are empty or not finite, or their axis does not fall.</exception>
    public static UnsignedCertificate Render(CertificateContent content, ReleaseToken token)
    {
        CheckTrace(content.Trace);
        token.Use(content.Lot.Id, content.ReportSha256);
        var document = new PdfDocument();
        var sheet = new Sheet(document);
        Opening(sheet, content);
        Verdict(sheet, content, token);
        Measurement(sheet, content);
        Tables(sheet, content);
        Signatures(sheet, content);
        Cautions(sheet, content);
        Provenance(sheet, content);
        sheet.Finish(content.Laboratory, $"Certificate {content.Number}, lot {content.Lot.Number}");
        return new UnsignedCertificate(CertificateFile.Save(document, content), content.IssuedAt);
    }

    private static void Opening(Sheet sheet, CertificateContent content)
    {
        sheet.Need(200);
        sheet.Paragraph("Certificate of analysis by proton NMR", CertificateFonts.Semibold(18));
        sheet.Y += 2;
        sheet.Paragraph(content.Laboratory, CertificateFonts.Regular(10));
        sheet.Y += 8;
        double top = sheet.Y;
        double width = content.Product.Drawing is null ? Sheet.Width : Sheet.Width - 150;
        sheet.Fields(
            [
                ("Certificate", content.Number + (content.Version > 1 ? Text($", version {content.Version}") : "")),
                .. content.SupersedesNumber is { } old ? [("Supersedes", old)] : Array.Empty<(string, string)>(),
                ("Issued", Time(content.IssuedAt)),
                ("Product", $"{content.Product.Code}, {content.Product.Name}"),
                ("Lot", content.Lot.Number),
                ("Structure (SMILES)", content.Product.Smiles),
                ("InChIKey", content.Product.InchiKey),
                ("Formula, molar mass", Text($"{content.Product.Formula}, {content.Product.MolarMassGramPerMol:0.000} g/mol")),
                ("Specification", content.Specification),
            ],
            width);
        if (content.Product.Drawing is { } drawing && sheet.Y > top)
        {
            Structure(sheet, drawing, new XRect(Sheet.Margin + Sheet.Width - 140, top, 140, 100));
            sheet.Y = Math.Max(sheet.Y, top + 104);
        }
    }

    private static void Structure(Sheet sheet, StructureDrawing drawing, XRect box)
    {
        double scale = Math.Min(box.Width / drawing.Width, box.Height / drawing.Height);
        double left = box.X + ((box.Width - (scale * drawing.Width)) / 2);
        var pen = new XPen(XColors.Black, 0.8) { LineCap = XLineCap.Round };
        foreach (DrawnLine l in drawing.Lines)
        {
            sheet.Graphics.DrawLine(
                pen, left + (scale * l.X1), box.Y + (scale * l.Y1), left + (scale * l.X2), box.Y + (scale * l.Y2));
        }

        XFont font = CertificateFonts.Regular(8.5);
        foreach (DrawnLabel label in drawing.Labels)
        {
            string text = CertificateFonts.Coverage.Visible(label.Text);
            double x = left + (scale * label.X);
            double y = box.Y + (scale * label.Y);
            XSize size = sheet.Graphics.MeasureString(text, font);
            sheet.Graphics.DrawRectangle(XBrushes.White, x - (size.Width / 2) - 1, y - 5, size.Width + 2, 10);
            sheet.Graphics.DrawString(text, font, XBrushes.Black, new XPoint(x, y + 3), XStringFormats.BaseLineCenter);
        }
    }

    private static void Verdict(Sheet sheet, CertificateContent content, ReleaseToken token)
    {
        sheet.Heading("Result");
        string decision = token.ByException
            ? "released by exception, as the approved specification allows for a passed lot"
            : "released after review";
        sheet.Paragraph($"Verdict of the check: {content.Verdict}; {decision}.", CertificateFonts.Semibold(11));
        sheet.Paragraph(content.Summary, CertificateFonts.Regular(9.5));
    }

    private static void Measurement(Sheet sheet, CertificateContent content)
    {
        CertifiedLot lot = content.Lot;
        sheet.Heading("Measurement");
        sheet.Fields(
        [
            ("Sampled", lot.SampledAt is { } at ? Time(at) : "not stated"),
            ("Spectra received", Time(lot.ReceivedAt)),
            ("Instrument", (lot.Instrument ?? "not stated") + (lot.FrequencyMHz is { } mhz ? Text($", {mhz:0.##} MHz for protons") : "")),
            ("Solvent", lot.Solvent),
        ]);
        if (content.Trace is { } trace)
        {
            sheet.Y += 4;
            SpectrumDrawing.Draw(sheet, trace);
        }
    }

    private static void Tables(Sheet sheet, CertificateContent content)
    {
        Table(sheet, "Findings", content.Findings,
            [new("Criterion", 17), new("Subject", 10), new("Finding", 34), new("Observed", 16), new("Limit", 15), new("Outcome", 8)],
            f => [f.Criterion, f.Subject, f.Statement, f.Observed, f.Limit, f.Outcome]);
        Table(sheet, "Proton ledger", content.Protons,
            [new("Group", 9), new("Expected H", 10), new("Found H", 9), new("Expected ppm", 14), new("Found ppm", 10), new("Splitting", 20), new("Remark", 28)],
            p => [p.Group, p.ExpectedCount, p.ObservedCount, p.ExpectedPpm, p.ObservedPpm, p.Splitting, p.Remark]);
        Table(sheet, "Quantities", content.Quantities,
            [new("Quantity", 40), new("Value", 25), new("Expanded uncertainty", 35)],
            q => [q.Name, q.Value, q.Uncertainty]);
        Table(sheet, "Other substances seen", content.OtherSubstances,
            [new("Substance", 40), new("Role", 30), new("Amount", 30)],
            s => [s.Name, s.Role, s.Amount]);
        Table(sheet, "Review", content.Reviews,
            [new("Decision", 13), new("By", 24), new("At", 20), new("Reason", 43)],
            r => [r.Decision, r.By, Time(r.At), r.Reason]);
    }

    private static void Table<T>(
        Sheet sheet, string title, IReadOnlyCollection<T> rows, IReadOnlyList<Column> columns, Func<T, string[]> cells)
    {
        if (rows.Count > 0)
        {
            sheet.Heading(title, 60);
            sheet.Table(columns, rows.Select(cells));
        }
    }

    private static void Signatures(Sheet sheet, CertificateContent content)
    {
        Table(sheet, "Electronic signatures", content.Signatures,
            [new("Name", 27), new("At", 20), new("Meaning", 13), new("SHA-256 of the signed statement", 40)],
            s => [s.PrintedName, Time(s.At), s.Meaning, s.StatementSha256]);
    }

    private static void Cautions(Sheet sheet, CertificateContent content)
    {
        sheet.Heading("What this certificate does not say");
        foreach (string caution in StandingCautions.Concat(content.Cautions))
        {
            sheet.Paragraph(caution, CertificateFonts.Regular(9));
            sheet.Y += 2;
        }
    }

    private static void Provenance(Sheet sheet, CertificateContent content)
    {
        sheet.Heading("How to check this certificate", 90);
        sheet.Paragraph(
            "The file is signed; any change to it makes the signature invalid. The data are attached to it as certificate.json. "
            + "The audit log of the laboratory can be checked against the head below without its service.",
            CertificateFonts.Regular(9));
        sheet.Y += 3;
        double top = sheet.Y;
        double width = Sheet.Width;
        if (content.VerificationUrl is { } address)
        {
            sheet.Need(QrDrawing.Side);
            top = sheet.Y;
            QrDrawing.Draw(sheet.Graphics, address, Sheet.Margin + Sheet.Width - QrDrawing.Side, top);
            width -= QrDrawing.Side + 8;
        }

        int page = sheet.Page;
        sheet.Fields(
            [
                ("Audit log", Text($"{content.AuditHead.Size} entries at {Time(content.AuditHead.At)}")),
                ("Root of the log", content.AuditHead.RootHex),
                .. content.Spectra.Select(s => ("Spectrum, SHA-256", $"{s.Sha256} ({s.Name})")),
                ("Report, SHA-256", content.ReportSha256),
                ("Attachment, SHA-256", CertificateFile.AttachmentSha256(content)),
                ("Made by", $"Qc {content.ServiceVersion}, engine {content.EngineVersion}"),
                .. content.VerificationUrl is { } url ? [("State of the certificate", url)] : Array.Empty<(string, string)>(),
            ],
            width);
        if (content.VerificationUrl is not null && sheet.Page == page)
        {
            sheet.Y = Math.Max(sheet.Y, top + QrDrawing.Side);
        }
    }

    private static void CheckTrace(CertificateTrace? trace)
    {
        if (trace is null)
        {
            return;
        }

        bool sound = trace.Measured.Length > 1
            && trace.Modelled.Length == trace.Measured.Length && trace.LeftOver.Length == trace.Measured.Length
            && trace.PpmPerPoint < 0 && double.IsFinite(trace.FirstPpm)
            && trace.Measured.All(float.IsFinite) && trace.Modelled.All(float.IsFinite) && trace.LeftOver.All(float.IsFinite);
        if (!sound)
        {
            throw new ArgumentException("The curves must have one length, finite values and a falling axis.", nameof(trace));
        }
    }

    private static string Time(DateTimeOffset at) => Text($"{at.UtcDateTime:yyyy-MM-dd HH:mm:ss} UTC");

    private static string Text(FormattableString text) => text.ToString(CultureInfo.InvariantCulture);
}
