using System.Security.Cryptography;
using System.Security.Cryptography.Pkcs;
using System.Security.Cryptography.X509Certificates;
using System.Text;
using System.Text.RegularExpressions;
using Qc.Evidence;
using Xunit;

namespace Qc.Certificates.Tests;

public sealed class CertificateTests
{
    [Fact]
    public void The_signature_covers_the_whole_file_but_its_own_string_and_verifies()
    {
        byte[] pdf = Sample.Signed();
        (int start, int end) = Gap(pdf);
        Assert.Equal((byte)'<', pdf[start]);
        Assert.Equal((byte)'>', pdf[end - 1]);
        Assert.All(pdf[(start + 1)..(end - 1)], b => Assert.True(char.IsAsciiHexDigit((char)b)));
        Assert.True(Verifies(pdf));
    }

    [Fact]
    public void A_changed_byte_anywhere_in_the_signed_range_breaks_the_signature()
    {
        byte[] pdf = Sample.Signed();
        (int start, int end) = Gap(pdf);
        SignedCms cms = Cms(pdf, start, end);
        byte[] digest = SHA256.HashData(cms.ContentInfo.Content);
        cms.CheckSignature(verifySignatureOnly: true);

        // Each signed byte enters the digest; CMS itself is asked at places spread over the file and at every edge.
        int[] places = [0, 1, start - 1, end, pdf.Length - 1, .. Enumerable.Range(0, 200).Select(i => (int)((long)i * pdf.Length / 200))];
        foreach (int place in places.Where(p => p < start || p >= end))
        {
            byte[] changed = [.. pdf];
            changed[place] ^= 1;
            byte[] content = [.. changed.AsSpan(0, start), .. changed.AsSpan(end)];
            Assert.NotEqual(digest, SHA256.HashData(content));
            var again = new SignedCms(new ContentInfo(content), detached: true);
            again.Decode(Convert.FromHexString(Encoding.ASCII.GetString(pdf, start + 1, CmsLength(pdf, start) * 2)));
            Assert.Throws<CryptographicException>(() => again.CheckSignature(verifySignatureOnly: true));
        }
    }

    [Fact]
    public void The_signature_names_its_certificate_by_SHA256()
    {
        byte[] pdf = Sample.Signed();
        (int start, int end) = Gap(pdf);
        SignedCms cms = Cms(pdf, start, end);
        X509Certificate2 signer = cms.SignerInfos[0].Certificate!;
        CryptographicAttributeObject attribute = Assert.Single(
            cms.SignerInfos[0].SignedAttributes.Cast<CryptographicAttributeObject>(), a => a.Oid.Value == "1.2.840.113549.1.9.16.2.47");
        byte[] hash = SHA256.HashData(signer.RawData);
        Assert.True(attribute.Values[0].RawData.AsSpan().IndexOf(hash) > 0);
    }

    [Fact]
    public void The_data_are_attached_byte_for_byte()
    {
        CertificateContent content = Sample.Plain();
        byte[] pdf = Sample.Signed(content);
        byte[] json = Encoding.UTF8.GetBytes(content.MachineReadableJson);
        int place = pdf.AsSpan().IndexOf("/Type/EmbeddedFile"u8);
        int stream = place + pdf.AsSpan(place).IndexOf("stream\n"u8) + 7;
        Assert.Equal(json, pdf[stream..(stream + json.Length)]);
        Assert.Contains("data sha256 " + Convert.ToHexStringLower(SHA256.HashData(json)), Encoding.Latin1.GetString(pdf), StringComparison.Ordinal);
    }

    [Fact]
    public void Metadata_and_document_information_agree()
    {
        string pdf = Encoding.Latin1.GetString(Sample.Signed());
        string number = Regex.Match(pdf, @"/Type/Catalog.*?/Metadata (\d+) 0 R").Groups[1].Value;
        string metadata = Regex.Match(pdf, $@"\n{number} 0 obj.*?endobj", RegexOptions.Singleline).Value;
        Assert.Contains("<pdfaid:part>3</pdfaid:part>", metadata, StringComparison.Ordinal);
        string producer = Regex.Match(pdf, @"/Producer\((.*?)\)").Groups[1].Value;
        Assert.Contains($"<pdf:Producer>{producer}</pdf:Producer>", metadata, StringComparison.Ordinal);
    }

    [Fact]
    public void A_release_serves_for_one_certificate_and_for_its_own_lot()
    {
        ReleaseToken token = Sample.Token();
        CertificateRenderer.Render(Sample.Plain(), token);
        Assert.Throws<InvalidOperationException>(() => CertificateRenderer.Render(Sample.Plain(), token));
        Assert.Throws<InvalidOperationException>(() => CertificateRenderer.Render(Sample.Plain(), Sample.Token("L2")));
    }

    [Fact]
    public void Curves_that_do_not_fit_together_are_refused_before_the_release_is_used()
    {
        ReleaseToken token = Sample.Token();
        CertificateContent bad = Sample.Plain() with { Trace = new CertificateTrace(10, -1, [1, float.NaN], [1, 1], [0, 0]) };
        Assert.Throws<ArgumentException>(() => CertificateRenderer.Render(bad, token));
        CertificateRenderer.Render(Sample.Plain(), token);
    }

    [Fact]
    public void A_certificate_that_has_ended_or_an_authority_that_has_does_not_sign()
    {
        using X509Certificate2 ended = SiteKey.Create("Plant", Sample.IssuedAt.AddYears(-2), Sample.IssuedAt.AddDays(-1));
        using X509Certificate2 good = Sample.Certificate();
        UnsignedCertificate unsigned = CertificateRenderer.Render(Sample.Plain(), Sample.Token());
        Assert.Throws<InvalidOperationException>(() => new CertificateSigner(ended).Sign(unsigned));
        Assert.Throws<InvalidOperationException>(() => new CertificateSigner(good, [ended]).Sign(unsigned));
        Assert.NotEmpty(new CertificateSigner(good).Sign(unsigned));
    }

    [Fact]
    public void The_site_key_survives_its_PKCS12_file_and_asks_for_the_password()
    {
        using X509Certificate2 certificate = Sample.Certificate();
        byte[] file = SiteKey.Export(certificate, "one two three");
        using X509Certificate2 read = SiteKey.Import(file, "one two three");
        Assert.True(read.HasPrivateKey);
        Assert.Equal(certificate.Thumbprint, read.Thumbprint);
        Assert.ThrowsAny<CryptographicException>(() => SiteKey.Import(file, "other"));
    }

    /// <summary>Start of the string that holds the signature, and the place after it, as the byte range says.</summary>
    internal static (int Start, int End) Gap(byte[] pdf)
    {
        Match range = Regex.Match(Encoding.Latin1.GetString(pdf), @"/ByteRange\[0 (\d+) (\d+) (\d+)\]");
        int[] numbers = [.. range.Groups.Cast<Group>().Skip(1).Select(g => int.Parse(g.Value, System.Globalization.CultureInfo.InvariantCulture))];
        Assert.Equal(pdf.Length, numbers[1] + numbers[2]);
        return (numbers[0], numbers[1]);
    }

    internal static bool Verifies(byte[] pdf)
    {
        (int start, int end) = Gap(pdf);
        try
        {
            Cms(pdf, start, end).CheckSignature(verifySignatureOnly: true);
            return true;
        }
        catch (CryptographicException)
        {
            return false;
        }
    }

    private static SignedCms Cms(byte[] pdf, int start, int end)
    {
        var cms = new SignedCms(new ContentInfo([.. pdf.AsSpan(0, start), .. pdf.AsSpan(end)]), detached: true);
        cms.Decode(Convert.FromHexString(Encoding.ASCII.GetString(pdf, start + 1, 2 * CmsLength(pdf, start))));
        return cms;
    }

    /// <summary>Length of the DER value that begins after the bracket: the rest of the room is zeros.</summary>
    private static int CmsLength(byte[] pdf, int start)
    {
        byte[] room = Convert.FromHexString(Encoding.ASCII.GetString(pdf, start + 1, 2 * CertificateFile.SignatureCapacity));
        System.Formats.Asn1.AsnDecoder.ReadEncodedValue(room, System.Formats.Asn1.AsnEncodingRules.BER, out _, out _, out int length);
        return length;
    }
}
