using System.Buffers;
using System.Formats.Asn1;
using System.Globalization;
using System.Security.Cryptography;
using System.Security.Cryptography.Pkcs;
using System.Security.Cryptography.X509Certificates;
using System.Text;
using System.Text.RegularExpressions;
using Qc.Evidence;

namespace Qc.Verify;

/// <summary>
/// Checks a certificate file as the service writes it, by plain reading of its bytes: one signature whose byte range is the
/// whole file except the hexadecimal string that holds it; a detached CMS signature over that range, by a certificate that
/// is, or stands under, the one given and was valid at the time of signing; signing-certificate-v2 (RFC 5035) names that
/// certificate; the attached data have the SHA-256 that stands in the signed metadata. A file of another writer may be sound
/// and yet be refused here. Revocation and time stamps are not checked; the time is the one the signer claims.
/// </summary>
public static partial class CertificateCheck
{
    private const string SigningCertificateV2 = "1.2.840.113549.1.9.16.2.47";
    private static readonly SearchValues<char> HexDigits = SearchValues.Create("0123456789abcdef");
    private static readonly string[] Digests = ["2.16.840.1.101.3.4.2.1", "2.16.840.1.101.3.4.2.2", "2.16.840.1.101.3.4.2.3"];

    /// <summary>Checks a file against a certificate in PEM: the site's own, or an authority's above it.</summary>
    public static Verification Verify(byte[] file, string trustedPem)
    {
        using X509Certificate2 trusted = Trusted(trustedPem);
        string text = Encoding.Latin1.GetString(file);
        if (!TryRange(text, out int start, out int end))
        {
            return No("No signature covers the whole file: it is not signed, or something was added or removed after signing.");
        }

        if (!TrySignature(file, text, start, end, out SignedCms? cms, out string why))
        {
            return No(why);
        }

        if (!DateTime.TryParseExact(
            SigningTime().Match(text, end).Groups[1].Value, "yyyyMMddHHmmss", CultureInfo.InvariantCulture,
            DateTimeStyles.AssumeUniversal | DateTimeStyles.AdjustToUniversal, out DateTime at))
        {
            return No("The signature does not state its time.");
        }

        X509Certificate2 signer = cms!.SignerInfos[0].Certificate!;
        if (Distrust(signer, cms.Certificates, trusted, at) is { } distrust)
        {
            return No(distrust);
        }

        return Attachment.Verify(file, text) is { IsValid: false } attachment
            ? attachment
            : new Verification(
                true,
                string.Create(CultureInfo.InvariantCulture, $"signed by {signer.Subject} at {at:yyyy-MM-dd HH:mm:ss} UTC (as the signer states); the whole file is covered and the attached data are those named."));
    }

    private static X509Certificate2 Trusted(string pem)
    {
        try
        {
            return X509Certificate2.CreateFromPem(pem);
        }
        catch (CryptographicException e)
        {
            throw new UnusableKeyException("The file given with --ca holds no certificate in PEM.", e);
        }
    }

    /// <summary>The gap [start, end) that the byte range leaves: a string in angle brackets, nothing else.</summary>
    private static bool TryRange(string text, out int start, out int end)
    {
        foreach (Match match in ByteRange().Matches(text))
        {
            if (int.TryParse(match.Groups[1].Value, NumberStyles.None, CultureInfo.InvariantCulture, out start)
                && int.TryParse(match.Groups[2].Value, NumberStyles.None, CultureInfo.InvariantCulture, out end)
                && int.TryParse(match.Groups[3].Value, NumberStyles.None, CultureInfo.InvariantCulture, out int rest)
                && start < end - 2 && end < text.Length && rest == text.Length - end
                && text[start] == '<' && text[end - 1] == '>'
                && text.AsSpan(start + 1, end - start - 2).IndexOfAnyExcept(HexDigits) < 0
                && (end - start) % 2 == 0)
            {
                return true;
            }
        }

        start = end = 0;
        return false;
    }

    private static bool TrySignature(byte[] file, string text, int start, int end, out SignedCms? cms, out string why)
    {
        cms = new SignedCms(new ContentInfo([.. file.AsSpan(0, start), .. file.AsSpan(end)]), detached: true);
        why = "The signature is not valid: the file was changed, or the signature was.";
        byte[] room = Convert.FromHexString(text.AsSpan(start + 1, end - start - 2));
        try
        {
            AsnDecoder.ReadEncodedValue(room, AsnEncodingRules.BER, out _, out _, out int length);
            if (room.AsSpan(length).ContainsAnyExcept((byte)0))
            {
                return false;
            }

            cms.Decode(room[..length]);
            cms.CheckSignature(verifySignatureOnly: true);
        }
        catch (Exception e) when (e is CryptographicException or AsnContentException)
        {
            return false;
        }

        why = "The signature must be one, with SHA-256 or longer, and name its certificate.";
        return cms.SignerInfos is [{ Certificate: { } signer } info]
            && Digests.Contains(info.DigestAlgorithm.Value)
            && info.SignedAttributes.Cast<CryptographicAttributeObject>().Any(a => a.Oid.Value == SigningCertificateV2 && Names(a, signer));
    }

    /// <summary>Whether SigningCertificateV2 begins with an ESSCertIDv2 that has the SHA-256 of the certificate.</summary>
    private static bool Names(CryptographicAttributeObject attribute, X509Certificate2 signer)
    {
        try
        {
            AsnReader first = new AsnReader(attribute.Values[0].RawData, AsnEncodingRules.DER).ReadSequence().ReadSequence().ReadSequence();
            return first.ReadOctetString().AsSpan().SequenceEqual(SHA256.HashData(signer.RawData));
        }
        catch (AsnContentException)
        {
            return false;
        }
    }

    private static string? Distrust(X509Certificate2 signer, X509Certificate2Collection others, X509Certificate2 trusted, DateTime at)
    {
        using var chain = new X509Chain();
        chain.ChainPolicy.TrustMode = X509ChainTrustMode.CustomRootTrust;
        chain.ChainPolicy.CustomTrustStore.Add(trusted);
        chain.ChainPolicy.ExtraStore.AddRange(others);
        chain.ChainPolicy.RevocationMode = X509RevocationMode.NoCheck;
        chain.ChainPolicy.DisableCertificateDownloads = true;
        chain.ChainPolicy.VerificationTime = at;
        return chain.Build(signer)
            ? null
            : $"The signature is by {signer.Subject}, which the given certificate does not vouch for at that time: "
                + string.Join(", ", chain.ChainStatus.Select(s => s.Status)) + ".";
    }

    private static Verification No(string message) => new(false, message);

    [GeneratedRegex(@"/ByteRange\s*\[\s*0 (\d{1,10}) (\d{1,10}) (\d{1,10})\s*\]")]
    private static partial Regex ByteRange();

    /// <summary>The service writes /M right after the signature's string.</summary>
    [GeneratedRegex(@"\G\s*/M\s*\(D:(\d{14})Z\)")]
    private static partial Regex SigningTime();
}
