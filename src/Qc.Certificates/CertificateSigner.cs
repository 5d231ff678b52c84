using System.Formats.Asn1;
using System.Globalization;
using System.Security.Cryptography;
using System.Security.Cryptography.Pkcs;
using System.Security.Cryptography.X509Certificates;
using System.Text;

namespace Qc.Certificates;

/// <summary>
/// Signs certificates in the form of PAdES B-B (ETSI EN 319 142-1, from memory): a detached CMS signature over the whole
/// file except the hexadecimal string that holds it, SHA-256, signed attributes content-type, message-digest and
/// signing-certificate-v2 (RFC 5035). The time claimed is /M of the signature dictionary; there is no time stamp.
/// </summary>
public sealed class CertificateSigner
{
    private const string SigningCertificateV2 = "1.2.840.113549.1.9.16.2.47";
    private const string Sha256Oid = "2.16.840.1.101.3.4.2.1";
    private readonly X509Certificate2 certificate;
    private readonly X509Certificate2Collection chain;

    /// <summary>Signs with this certificate and its private key.</summary>
    /// <param name="certificate">The site's certificate, with its private key.</param>
    /// <param name="chain">Certificates above it, put into each signature.</param>
    /// <exception cref="ArgumentException">There is no private key.</exception>
    public CertificateSigner(X509Certificate2 certificate, X509Certificate2Collection? chain = null)
    {
        if (!certificate.HasPrivateKey)
        {
            throw new ArgumentException("The certificate comes without its private key.", nameof(certificate));
        }

        this.certificate = certificate;
        this.chain = chain ?? [];
    }

    /// <summary>Signs a rendered certificate.</summary>
    /// <returns>The finished PDF.</returns>
    /// <exception cref="InvalidOperationException">A certificate of the chain is not valid at the time of issue.</exception>
    public byte[] Sign(UnsignedCertificate unsigned)
    {
        if (SiteKey.Obstacle(certificate, chain, unsigned.IssuedAt) is { } obstacle)
        {
            throw new InvalidOperationException(obstacle);
        }

        byte[] file = [.. unsigned.Bytes];
        int start = Only(file, "<" + new string('0', 2 * CertificateFile.SignatureCapacity) + ">");
        int end = start + 2 + (2 * CertificateFile.SignatureCapacity);
        int range = Only(file, CertificateFile.ByteRangeRoom);
        string byteRange = string.Create(CultureInfo.InvariantCulture, $"[0 {start} {end} {file.Length - end}]");
        Encoding.ASCII.GetBytes(byteRange.PadRight(CertificateFile.ByteRangeRoom.Length)).CopyTo(file, range);

        byte[] signature = Cms([.. file.AsSpan(0, start), .. file.AsSpan(end)]);
        if (signature.Length > CertificateFile.SignatureCapacity)
        {
            throw new InvalidOperationException("The signature with its chain is larger than the room for it.");
        }

        Encoding.ASCII.GetBytes(Convert.ToHexStringLower(signature)).CopyTo(file, start + 1);
        return file;
    }

    private byte[] Cms(byte[] content)
    {
        var signer = new CmsSigner(SubjectIdentifierType.IssuerAndSerialNumber, certificate)
        {
            DigestAlgorithm = new Oid(Sha256Oid),
            IncludeOption = X509IncludeOption.EndCertOnly,
        };
        signer.Certificates.AddRange(chain);
        signer.SignedAttributes.Add(new AsnEncodedData(new Oid(SigningCertificateV2), SigningCertificate(certificate)));
        var cms = new SignedCms(new ContentInfo(content), detached: true);
        cms.ComputeSignature(signer, silent: true);
        return cms.Encode();
    }

    /// <summary>SigningCertificateV2 with one ESSCertIDv2: the hash algorithm is the default, SHA-256, and so left out.</summary>
    private static byte[] SigningCertificate(X509Certificate2 certificate)
    {
        var writer = new AsnWriter(AsnEncodingRules.DER);
        using (writer.PushSequence())
        using (writer.PushSequence())
        using (writer.PushSequence())
        {
            writer.WriteOctetString(SHA256.HashData(certificate.RawData));
        }

        return writer.Encode();
    }

    private static int Only(byte[] file, string text)
    {
        byte[] wanted = Encoding.ASCII.GetBytes(text);
        int place = file.AsSpan().IndexOf(wanted);
        return place >= 0 && file.AsSpan(place + 1).IndexOf(wanted) < 0
            ? place
            : throw new InvalidOperationException("The room for the signature is not there exactly once.");
    }
}
