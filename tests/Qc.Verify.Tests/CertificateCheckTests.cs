using System.Security.Cryptography.X509Certificates;
using System.Text;
using Qc.Certificates;
using Qc.Certificates.Tests;
using Xunit;

namespace Qc.Verify.Tests;

public sealed class CertificateCheckTests : IDisposable
{
    private readonly X509Certificate2 site = Sample.Certificate();

    public void Dispose() => site.Dispose();

    [Fact]
    public void A_certificate_as_issued_verifies()
    {
        Evidence.Verification result = CertificateCheck.Verify(Signed(), site.ExportCertificatePem());
        Assert.True(result.IsValid, result.Message);
    }

    [Fact]
    public void The_certificate_of_another_site_of_the_same_name_is_refused()
    {
        using X509Certificate2 other = Sample.Certificate();
        Assert.Contains("does not vouch", CertificateCheck.Verify(Signed(), other.ExportCertificatePem()).Message, StringComparison.Ordinal);
    }

    [Fact]
    public void What_is_added_after_the_signature_is_refused() =>
        Assert.False(CertificateCheck.Verify([.. Signed(), (byte)'\n'], site.ExportCertificatePem()).IsValid);

    [Fact]
    public void What_is_cut_off_is_refused() =>
        Assert.False(CertificateCheck.Verify(Signed()[..^1], site.ExportCertificatePem()).IsValid);

    [Fact]
    public void Changed_bytes_are_refused_everywhere_in_the_file_and_in_the_room_for_the_signature()
    {
        byte[] pdf = Signed();
        string pem = site.ExportCertificatePem();
        for (int place = 0; place < pdf.Length; place += 509)
        {
            foreach (int flip in new[] { 1, 0x20 })
            {
                byte[] changed = [.. pdf];
                changed[place] ^= (byte)flip;
                Assert.False(CertificateCheck.Verify(changed, pem).IsValid, $"byte {place}, bits {flip}");
            }
        }
    }

    [Fact]
    public void Data_that_are_not_those_named_are_refused_even_where_the_signature_is_valid()
    {
        // The file is consistent but for the hash: signed with the metadata of other data.
        UnsignedCertificate unsigned = CertificateRenderer.Render(Sample.Plain(), Sample.Token());
        byte[] bytes = unsigned.Bytes;
        int json = bytes.AsSpan().IndexOf(Encoding.UTF8.GetBytes(Sample.Plain().MachineReadableJson));
        bytes[json + 2] ^= 1;
        byte[] pdf = new CertificateSigner(site).Sign(unsigned);
        Assert.Contains("SHA-256", CertificateCheck.Verify(pdf, site.ExportCertificatePem()).Message, StringComparison.Ordinal);
    }

    private byte[] Signed() => new CertificateSigner(site).Sign(CertificateRenderer.Render(Sample.Plain(), Sample.Token()));
}
