using System.Security.Cryptography;
using System.Text.Json;
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
          qc-verify log <export.json> --key <public.pem> [--head <earlier.json>]
          qc-verify proof <proof.json> --key <public.pem>
          qc-verify archive <lot.zip> --key <public.pem>
          qc-verify certificate <certificate.pdf> --ca <certificate.pem>
        log: every entry of an export of the audit log is as signed, and none is missing; with --head, it also begins with
          the entries of a head that was kept: an answer of /api/v1/audit/head, or the data attached to a certificate.
        proof: an entry is in the signed log, or a log only grew since an older head.
        archive: every file of a lot's archive is as the site signed it, none was added, and its log proofs hold.
        certificate: the signature is valid, covers the whole file and is by the site or authority given;
          the attached data are those that the certificate names.
        """;

    /// <summary>Runs a command.</summary>
    public static int Run(string[] arguments, TextWriter output, TextWriter error)
    {
        string? earlier = arguments is ["log", _, _, _, "--head", var kept] ? kept : null;
        if ((earlier is null ? arguments : arguments[..4]) is not [var command, var path, var option, var keyPath]
            || (command, option) is not (("log", "--key") or ("archive", "--key") or ("proof", "--key") or ("certificate", "--ca")))
        {
            error.WriteLine(Usage);
            return 2;
        }

        try
        {
            byte[] file = File.ReadAllBytes(path);
            string pem = File.ReadAllText(keyPath);
            Verification result = command == "certificate" ? CertificateCheck.Verify(file, pem) : WithKey(command, file, pem, earlier);
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

    private static Verification WithKey(string command, byte[] file, string pem, string? earlier)
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

        if (command is "proof" or "archive")
        {
            return command == "proof" ? LogProof.Verify(file, key) : ArchiveCheck.Verify(file, key);
        }

        if (earlier is null)
        {
            return AuditExport.Verify(file, key);
        }

        (string text, string signature) = Head(File.ReadAllBytes(earlier));
        return AuditExport.VerifyAgainst(file, text, signature, key);
    }

    /// <summary>Text and signature of a head, at the top of a JSON file or below its "auditHead".</summary>
    private static (string Text, string Signature) Head(byte[] json)
    {
        try
        {
            using JsonDocument document = JsonDocument.Parse(json);
            JsonElement head = document.RootElement.TryGetProperty("auditHead", out JsonElement inside) ? inside : document.RootElement;
            return (head.GetProperty("text").GetString()!, head.GetProperty("signature").GetString()!);
        }
        catch (Exception e) when (e is JsonException or KeyNotFoundException or InvalidOperationException)
        {
            throw new UnusableKeyException("The file given with --head holds no signed head.", e);
        }
    }
}
