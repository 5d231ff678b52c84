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
