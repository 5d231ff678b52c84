using System.Security.Cryptography;
using System.Security.Cryptography.X509Certificates;
using Qc.Certificates;

namespace Qc.Service.Hosting;

/// <summary>The site's signing certificate: from a configured PKCS#12 file, else self-signed and kept below the data folder.</summary>
public sealed class SiteCertificate
{
    private static readonly TimeSpan Validity = TimeSpan.FromDays(3 * 365);

    private SiteCertificate(X509Certificate2 certificate) => Signer = new CertificateSigner(certificate);

    /// <summary>Signs certificates.</summary>
    public CertificateSigner Signer { get; }

    /// <summary>Loads or makes it.</summary>
    public static SiteCertificate Load(string dataFolder, string site, IConfiguration configuration, DateTimeOffset now, ILogger logger)
    {
        string folder = Path.Combine(dataFolder, "keys");
        string file = configuration["Qc:SigningCertificateFile"] ?? Path.Combine(folder, "certificate.p12");
        string passwordFile = configuration["Qc:SigningCertificatePasswordFile"] ?? Path.Combine(folder, "certificate.password");
        if (!File.Exists(file) && configuration["Qc:SigningCertificateFile"] is null)
        {
            string made = Convert.ToHexStringLower(RandomNumberGenerator.GetBytes(24));
            using X509Certificate2 fresh = SiteKey.Create(site, now.AddMinutes(-5), now + Validity);
            SecretFile.Write(passwordFile, made);
            SecretFile.Write(file, SiteKey.Export(fresh, made));
            File.WriteAllText(Path.Combine(folder, "certificate.pem"), fresh.ExportCertificatePem());
        }

        X509Certificate2 certificate = SiteKey.Import(File.ReadAllBytes(file), File.ReadAllText(passwordFile).Trim());
        if (SiteKey.Obstacle(certificate, [], now) is { } obstacle)
        {
            logger.LogWarning("The signing certificate: {Obstacle}", obstacle);
        }

        if (certificate.NotAfter.ToUniversalTime() < now.UtcDateTime.AddDays(60))
        {
            logger.LogWarning("The signing certificate ends on {End}; replace it in time", certificate.NotAfter);
        }

        return new SiteCertificate(certificate);
    }
}
