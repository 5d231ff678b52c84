using System.Security.Cryptography;
using System.Text;
using System.Text.Json.Nodes;
using Xunit;

namespace Qc.Evidence.Tests;

public sealed class AuditExportTests : IDisposable
{
    private readonly ECDsa key = ECDsa.Create(ECCurve.NamedCurves.nistP256);

    public void Dispose() => key.Dispose();

    [Fact]
    public void A_log_as_written_verifies() => Assert.True(AuditExport.Verify(Export(3), key).IsValid);

    [Fact]
    public void Another_key_is_refused()
    {
        using var other = ECDsa.Create(ECCurve.NamedCurves.nistP256);
        Assert.False(AuditExport.Verify(Export(3), other).IsValid);
    }

    [Fact]
    public void Every_changed_byte_of_a_log_is_refused()
    {
        byte[] file = Export(3);
        for (int i = 0; i < file.Length; i++)
        {
            foreach (int flip in new[] { 1, 4, 0x20 })
            {
                byte[] changed = [.. file];
                changed[i] ^= (byte)flip;
                Assert.False(AuditExport.Verify(changed, key).IsValid, $"byte {i}, bits {flip}");
            }
        }
    }

    [Fact]
    public void Every_changed_byte_of_a_proof_is_refused()
    {
        (string[] entries, MerkleTree.NodeReader read) = Log(7);
        TreeHead old = Head(3, read);
        TreeHead head = Head(7, read);
        byte[][] proofs =
        [
            LogProof.WriteInclusion(entries[4], MerkleTree.InclusionProof(4, 7, read), head.Text, head.Sign(key)),
            LogProof.WriteConsistency(old.Text, old.Sign(key), head.Text, head.Sign(key), MerkleTree.ConsistencyProof(3, 7, read)),
        ];
        foreach (byte[] proof in proofs)
        {
            Assert.True(LogProof.Verify(proof, key).IsValid);
            for (int i = 0; i < proof.Length; i++)
            {
                byte[] changed = [.. proof];
                changed[i] ^= 1;
                Assert.False(LogProof.Verify(changed, key).IsValid, $"byte {i}");
            }
        }
    }

    [Fact]
    public void The_first_changed_entry_is_named()
    {
        string changed = Encoding.UTF8.GetString(Export(5)).Replace("lot-3", "lot-8", StringComparison.Ordinal);
        Assert.Contains("Entry 3 ", AuditExport.Verify(Encoding.UTF8.GetBytes(changed), key).Message, StringComparison.Ordinal);
    }

    [Fact]
    public void An_entry_changed_together_with_its_leaf_hash_does_not_have_the_signed_root()
    {
        (string[] entries, MerkleTree.NodeReader read) = Log(5);
        TreeHead head = Head(5, read);
        entries[3] = entries[3].Replace("lot-3", "lot-8", StringComparison.Ordinal);
        Verification result = AuditExport.Verify(AuditExport.Write(entries, head.Text, head.Sign(key)), key);
        Assert.False(result.IsValid);
        Assert.Contains("signed root", result.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void A_log_that_lost_its_last_entry_is_refused()
    {
        (string[] entries, MerkleTree.NodeReader read) = Log(5);
        TreeHead head = Head(5, read);
        Assert.False(AuditExport.Verify(AuditExport.Write(entries[..4], head.Text, head.Sign(key)), key).IsValid);
    }

    private static TreeHead Head(int size, MerkleTree.NodeReader read) =>
        new("qc.example", size, MerkleTree.Root(size, read), new DateTimeOffset(2026, 1, 2, 3, 4, 5, TimeSpan.Zero));

    private byte[] Export(int count)
    {
        (string[] entries, MerkleTree.NodeReader read) = Log(count);
        TreeHead head = Head(count, read);
        return AuditExport.Write(entries, head.Text, head.Sign(key));
    }

    private static (string[] Entries, MerkleTree.NodeReader Read) Log(int count)
    {
        var nodes = new Dictionary<(int, long), byte[]>();
        var entries = new string[count];
        for (int i = 0; i < count; i++)
        {
            var entry = new AuditEntry(
                i, new DateTimeOffset(2026, 1, 1, 0, 0, i, TimeSpan.Zero), "person:ana", "lot.submitted", "lot", $"lot-{i}", "żółć \u0001", null, new JsonObject { ["mass"] = 20.13 });
            byte[] content = entry.ToCanonicalBytes();
            entries[i] = Encoding.UTF8.GetString(content);
            foreach ((int level, long index, byte[] hash) in MerkleTree.NodesFinishedBy(i, MerkleTree.LeafHash(content), (l, n) => nodes[(l, n)]))
            {
                nodes[(level, index)] = hash;
            }
        }

        return (entries, (level, index) => nodes[(level, index)]);
    }
}
