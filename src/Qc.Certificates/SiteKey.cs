using System.Globalization;
using System.Security.Cryptography;
using System.Security.Cryptography.X509Certificates;

namespace Qc.Certificates;

/// <summary>
/// The site's signing certificate: one that it makes itself (ECDSA on P-256, for document signing, RFC 9336), for sites
/// that have none from an authority. Others trust it by having its fingerprint from the site on another way.
/// </summary>
public static class SiteKey
{
    private const string DocumentSigning = "1.3.6.1.5.5.7.3.36";

    /// <summary>Makes a self-signed certificate with its private key.</summary>
    /// <param name="name">Name of the site; common name of the certificate.</param>
    /// <param name="notBefore">Valid from.</param>
    /// <param name="notAfter">Valid to.</param>
    public static X509Certificate2 Create(string name, DateTimeOffset notBefore, DateTimeOffset notAfter)
    {
        using var key = ECDsa.Create(ECCurve.NamedCurves.nistP256);
        var subject = new X500DistinguishedNameBuilder();
        subject.AddCommonName(name);
        var request = new CertificateRequest(subject.Build(), key, HashAlgorithmName.SHA256);
        request.CertificateExtensions.Add(new X509BasicConstraintsExtension(false, false, 0, true));
        request.CertificateExtensions.Add(
            new X509KeyUsageExtension(X509KeyUsageFlags.DigitalSignature | X509KeyUsageFlags.NonRepudiation, true));
        request.CertificateExtensions.Add(new X509EnhancedKeyUsageExtension([new Oid(DocumentSigning)], false));
        request.CertificateExtensions.Add(new X509SubjectKeyIdentifierExtension(request.PublicKey, false));
        return request.CreateSelfSigned(notBefore, notAfter);
    }

    /// <summary>Certificate and private key as PKCS#12, AES-256 under the password.</summary>
    public static byte[] Export(X509Certificate2 certificate, string password) =>
        certificate.ExportPkcs12(Pkcs12ExportPbeParameters.Pbes2Aes256Sha256, password);

    /// <summary>Reads a PKCS#12 file.</summary>
    /// <exception cref="CryptographicException">It is not one, or the password is wrong.</exception>
    public static X509Certificate2 Import(byte[] pkcs12, string password) => X509CertificateLoader.LoadPkcs12(pkcs12, password);

    /// <summary>Why the certificate must not sign at a time: it or one above it is not valid then; null where it may.</summary>
    public static string? Obstacle(X509Certificate2 certificate, X509Certificate2Collection chain, DateTimeOffset at)
    {
        foreach (X509Certificate2 link in new[] { certificate }.Concat(chain))
        {
            if (at.UtcDateTime < link.NotBefore.ToUniversalTime() || at.UtcDateTime > link.NotAfter.ToUniversalTime())
            {
                return string.Create(
                    CultureInfo.InvariantCulture,
                    $"The certificate \"{link.Subject}\" is valid from {link.NotBefore.ToUniversalTime():yyyy-MM-dd} to {link.NotAfter.ToUniversalTime():yyyy-MM-dd} only.");
            }
        }

        return null;
    }
}
