using System.Security.Cryptography;
using Qc.Evidence;

namespace Qc.Verify;

/// <summary>
/// The stand-alone verifier: checks what a Qc service handed out, without it. Exit codes: 0 verifies, 1 does not, 2 the
/// call was wrong or a file cannot be read.
/// </summary>
public static class CommandLine
{
    private const string Usage = """
        usage:
          qc-verify log <export.json> --key <public.pem>
          qc-verify proof <proof.json> --key <public.pem>
          qc-verify certificate <certificate.pdf> --ca <certificate.pem>
        log: every entry of an export of the audit log is as signed, and none is missing.
        proof: an entry is in the signed log, or a log only grew since an older head.
        certificate: the signature is valid, covers the whole file and is by the site or authority given;
          the attached data are those that the certificate names.
        """;

    /// <summary>Runs a command.</summary>
    public static int Run(string[] arguments, TextWriter output, TextWriter error)
    {
        if (arguments is not [var command, var path, var option, var keyPath]
            || (command, option) is not (("log", "--key") or ("proof", "--key") or ("certificate", "--ca")))
        {
            error.WriteLine(Usage);
            return 2;
        }

        try
        {
            byte[] file = File.ReadAllBytes(path);
            string pem = File.ReadAllText(keyPath);
            Verification result = command == "certificate" ? CertificateCheck.Verify(file, pem) : WithKey(command, file, pem);
            output.WriteLine((result.IsValid ? "VERIFIED: " : "NOT VERIFIED: ") + result.Message);
            return result.IsValid ? 0 : 1;
        }
        catch (Exception e) when (e is IOException or UnauthorizedAccessException)
        {
            error.WriteLine("A file cannot be read: " + e.Message);
            return 2;
        }
        catch (UnusableKeyException e)
        {
            error.WriteLine(e.Message);
            return 2;
        }
    }

    private static Verification WithKey(string command, byte[] file, string pem)
    {
        using var key = ECDsa.Create();
        try
        {
            key.ImportFromPem(pem);
        }
        catch (Exception e) when (e is ArgumentException or CryptographicException)
        {
            throw new UnusableKeyException("The key file holds no public EC key in PEM.", e);
        }

        return command == "log" ? AuditExport.Verify(file, key) : LogProof.Verify(file, key);
    }
}
