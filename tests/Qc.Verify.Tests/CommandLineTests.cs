using System.Security.Cryptography;
using System.Text;
using Qc.Certificates;
using Qc.Certificates.Tests;
using Qc.Evidence;
using Xunit;

namespace Qc.Verify.Tests;

public sealed class CommandLineTests : IDisposable
{
    private readonly string folder = Directory.CreateTempSubdirectory("qc-verify-").FullName;
    private readonly ECDsa key = ECDsa.Create(ECCurve.NamedCurves.nistP256);

    public void Dispose()
    {
        key.Dispose();
        Directory.Delete(folder, true);
    }

    [Fact]
    public void A_log_is_verified_and_every_changed_byte_of_it_is_refused()
    {
        byte[] log = Log();
        string pem = Write("key.pem", Encoding.ASCII.GetBytes(key.ExportSubjectPublicKeyInfoPem()));
        Assert.Equal(0, Run("log", Write("log.json", log), "--key", pem).Code);
        for (int i = 0; i < log.Length; i++)
        {
            byte[] changed = [.. log];
            changed[i] ^= 1;
            Assert.Equal(1, Run("log", Write("log.json", changed), "--key", pem).Code);
        }
    }

    [Fact]
    public void A_log_that_does_not_begin_with_what_was_signed_earlier_is_refused()
    {
        string pem = Write("key.pem", Encoding.ASCII.GetBytes(key.ExportSubjectPublicKeyInfoPem()));
        string log = Write("log.json", Log());
        Assert.Equal(0, Run("log", log, "--key", pem, "--head", Kept(Head(MerkleTree.LeafHash(Entry().ToCanonicalBytes())))).Code);
        Assert.Equal(1, Run("log", log, "--key", pem, "--head", Kept(Head(MerkleTree.LeafHash("another"u8)))).Code);
        Assert.Equal(1, Run("log", log, "--key", pem, "--head", Kept(Head(MerkleTree.LeafHash("another"u8)) with { Size = 2 })).Code);
        Assert.Equal(2, Run("log", log, "--key", pem, "--head", pem).Code);

        string Kept(TreeHead head) => Write(
            "certificate.json", System.Text.Json.JsonSerializer.SerializeToUtf8Bytes(new { auditHead = new { text = head.Text, signature = head.Sign(key) } }));
    }

    [Fact]
    public void An_archive_is_verified_and_one_with_an_added_file_is_refused()
    {
        string pem = Write("key.pem", Encoding.ASCII.GetBytes(key.ExportSubjectPublicKeyInfoPem()));
        var files = new Dictionary<string, byte[]> { ["spectra/1.dx"] = [1, 2, 3] };
        byte[] manifest = ArchiveManifest.Write("L1", files);
        files[ArchiveManifest.FileName] = manifest;
        files[ArchiveManifest.SignatureName] = Encoding.ASCII.GetBytes(ArchiveManifest.Sign(manifest, key));
        Assert.Equal(0, Run("archive", Write("lot.zip", Zip()), "--key", pem).Code);
        files["note.txt"] = [1];
        Assert.Equal(1, Run("archive", Write("lot.zip", Zip()), "--key", pem).Code);
        Assert.Equal(1, Run("archive", Write("lot.zip", [1, 2, 3]), "--key", pem).Code);

        byte[] Zip()
        {
            using var zip = new MemoryStream();
            using (var archive = new System.IO.Compression.ZipArchive(zip, System.IO.Compression.ZipArchiveMode.Create, leaveOpen: true))
            {
                foreach ((string name, byte[] bytes) in files)
                {
                    using Stream entry = archive.CreateEntry(name).Open();
                    entry.Write(bytes);
                }
            }

            return zip.ToArray();
        }
    }

    [Fact]
    public void A_proof_is_verified_and_refused_under_another_key()
    {
        byte[] leaf = MerkleTree.LeafHash(Entry().ToCanonicalBytes());
        TreeHead head = Head(leaf);
        string proof = Write("proof.json", LogProof.WriteInclusion(Encoding.UTF8.GetString(Entry().ToCanonicalBytes()), [], head.Text, head.Sign(key)));
        string pem = Write("key.pem", Encoding.ASCII.GetBytes(key.ExportSubjectPublicKeyInfoPem()));
        Assert.Equal(0, Run("proof", proof, "--key", pem).Code);
        using var other = ECDsa.Create(ECCurve.NamedCurves.nistP256);
        Assert.Equal(1, Run("proof", proof, "--key", Write("other.pem", Encoding.ASCII.GetBytes(other.ExportSubjectPublicKeyInfoPem()))).Code);
    }

    [Fact]
    public void A_certificate_is_verified()
    {
        using var site = Sample.Certificate();
        string pdf = Write("c.pdf", new CertificateSigner(site).Sign(CertificateRenderer.Render(Sample.Plain(), Sample.Token())));
        (int code, string said) = Run("certificate", pdf, "--ca", Write("ca.pem", Encoding.ASCII.GetBytes(site.ExportCertificatePem())));
        Assert.Equal(0, code);
        Assert.StartsWith("VERIFIED", said, StringComparison.Ordinal);
    }

    [Fact]
    public void A_wrong_call_a_missing_file_and_a_file_that_is_no_key_give_2()
    {
        string log = Write("log.json", Log());
        Assert.Equal(2, Run().Code);
        Assert.Equal(2, Run("log", log).Code);
        Assert.Equal(2, Run("log", log, "--ca", log).Code);
        Assert.Equal(2, Run("log", log, "--key", Path.Combine(folder, "none.pem")).Code);
        Assert.Equal(2, Run("log", log, "--key", log).Code);
        Assert.Equal(2, Run("certificate", log, "--ca", log).Code);
    }

    private static AuditEntry Entry() => new(
        0, Sample.IssuedAt, "person:ana", "lot.submitted", "lot", "L1", "reason", null, null);

    private static TreeHead Head(byte[] leaf) => new("qc.example", 1, leaf, Sample.IssuedAt);

    private byte[] Log()
    {
        byte[] content = Entry().ToCanonicalBytes();
        TreeHead head = Head(MerkleTree.LeafHash(content));
        return AuditExport.Write([Encoding.UTF8.GetString(content)], head.Text, head.Sign(key));
    }

    private string Write(string name, byte[] bytes)
    {
        string path = Path.Combine(folder, name);
        File.WriteAllBytes(path, bytes);
        return path;
    }

    private static (int Code, string Said) Run(params string[] arguments)
    {
        var output = new StringWriter();
        int code = CommandLine.Run(arguments, output, output);
        return (code, output.ToString());
    }
}
