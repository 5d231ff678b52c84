using System.ComponentModel;
using System.Diagnostics;
using System.Text;
using Xunit;

namespace Qc.Certificates.Tests;

/// <summary>What programs of others say about our certificates. Where a program is not installed, our own check stands in.</summary>
public sealed class OutsideToolsTests
{
    [Theory]
    [InlineData(false)]
    [InlineData(true)]
    public void Pdfsig_finds_the_signature_valid_and_the_total_document_signed(bool manyPages)
    {
        byte[] pdf = Sample.Signed(manyPages ? Sample.Long() : Sample.Plain());
        string? said = Run("pdfsig", pdf, "-nocert");
        if (said is null)
        {
            Assert.True(CertificateTests.Verifies(pdf));
            return;
        }

        Assert.Contains("Signature is Valid", said, StringComparison.Ordinal);
        Assert.Contains("Total document signed", said, StringComparison.Ordinal);
    }

    [Theory]
    [InlineData(false)]
    [InlineData(true)]
    public void Qpdf_finds_no_error(bool manyPages)
    {
        byte[] pdf = Sample.Signed(manyPages ? Sample.Long() : Sample.Plain());
        string? said = Run("qpdf", pdf, "--check");
        if (said is null)
        {
            EveryObjectIsWhereTheTableSays(Encoding.Latin1.GetString(pdf));
            return;
        }

        Assert.Contains("No syntax or stream encoding errors found", said, StringComparison.Ordinal);
    }

    [Fact]
    public void The_cross_reference_table_is_right() => EveryObjectIsWhereTheTableSays(Encoding.Latin1.GetString(Sample.Signed()));

    [Fact]
    public void Long_and_foreign_names_are_printed_in_full_on_numbered_pages()
    {
        string? text = Run("pdftotext", Sample.Signed(Sample.Long()), "-layout", output: "-");
        if (text is null)
        {
            Assert.Equal("[U+5317] Ω", CertificateFonts.Coverage.Visible("北 Ω"));
            return;
        }

        Assert.Contains("[U+5317][U+4EAC] продукт Ωμέγα", text, StringComparison.Ordinal);
        Assert.Contains("[U+202E]evil", text, StringComparison.Ordinal);
        Assert.Equal(300, Count(text, "ж"));
        Assert.Equal(250, Count(text, "Very"));
        string[] pages = text.TrimEnd('\f', '\n').Split('\f');
        for (int i = 0; i < pages.Length; i++)
        {
            Assert.Contains($"page {i + 1} of {pages.Length}", pages[i], StringComparison.Ordinal);
            Assert.Contains("Certificate QC-2026-000017", pages[i], StringComparison.Ordinal);
        }
    }

    [Theory]
    [InlineData("identity.unaccountedSignalInOneRegion", 60)]
    [InlineData("residual-solvent/dichloromethane", 70)]
    public void A_long_name_is_broken_where_its_words_end(string name, double width)
    {
        using var document = new PdfSharp.Pdf.PdfDocument();
        var sheet = new Sheet(document);
        sheet.Need(10);
        string[] lines = sheet.Wrap(name, CertificateFonts.Regular(8), width);
        Assert.Equal(name, string.Concat(lines));
        Assert.True(lines.Length > 1);
        Assert.All(lines.Skip(1), line => Assert.True(char.IsUpper(line[0]) || name[name.IndexOf(line, StringComparison.Ordinal) - 1] is '.' or '-' or '/', line));
    }

    [Fact]
    public void The_QR_code_is_a_square_with_three_finders_in_a_quiet_zone()
    {
        bool[][] modules = QrDrawing.Modules("https://qc.example/verify?number=QC-2026-000017");
        int n = modules.Length;
        Assert.All(modules, row => Assert.Equal(n, row.Length));
        Assert.Equal(0, (n - 8 - 17) % 4); // 17 + 4 * version, and four light modules on each side.
        for (int i = 0; i < n; i++)
        {
            Assert.False(modules[3][i] || modules[i][3] || modules[n - 4][i] || modules[i][n - 4]);
        }

        foreach ((int row, int column) in new[] { (4, 4), (4, n - 11), (n - 11, 4) })
        {
            bool[] middle = modules[row + 3][column..(column + 7)];
            Assert.Equal([true, false, true, true, true, false, true], middle);
        }
    }

    private static int Count(string text, string part) => text.Split(part).Length - 1;

    private static void EveryObjectIsWhereTheTableSays(string pdf)
    {
        int table = pdf.LastIndexOf("\nxref\n", StringComparison.Ordinal) + 1;
        string[] lines = pdf[table..].Split('\n');
        int count = int.Parse(lines[1].Split(' ')[1], System.Globalization.CultureInfo.InvariantCulture);
        for (int i = 1; i < count; i++)
        {
            int offset = int.Parse(lines[2 + i][..10], System.Globalization.CultureInfo.InvariantCulture);
            Assert.StartsWith($"{i} 0 obj", pdf[offset..(offset + 12)], StringComparison.Ordinal);
        }
    }

    /// <summary>Runs a program on a file; null where there is no such program.</summary>
    private static string? Run(string program, byte[] pdf, string option, string? output = null)
    {
        string path = Path.Combine(Path.GetTempPath(), Path.GetRandomFileName() + ".pdf");
        File.WriteAllBytes(path, pdf);
        try
        {
            var start = new ProcessStartInfo(program)
            {
                RedirectStandardOutput = true,
                RedirectStandardError = true,
                StandardOutputEncoding = Encoding.UTF8,
            };
            foreach (string argument in new[] { option, path, output }.OfType<string>())
            {
                start.ArgumentList.Add(argument);
            }

            using Process process = Process.Start(start)!;
            Task<string> errors = process.StandardError.ReadToEndAsync();
            string said = process.StandardOutput.ReadToEnd();
            process.WaitForExit();
            return said + errors.Result;
        }
        catch (Win32Exception)
        {
            return null;
        }
        finally
        {
            File.Delete(path);
        }
    }
}
