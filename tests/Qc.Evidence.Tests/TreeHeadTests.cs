using System.Security.Cryptography;
using Xunit;

namespace Qc.Evidence.Tests;

public class TreeHeadTests
{
    private static readonly DateTimeOffset At = new(2026, 3, 4, 5, 6, 7, TimeSpan.Zero);

    [Fact]
    public void The_text_form_is_that_of_the_specification_and_reads_back()
    {
        var head = new TreeHead("qc.example", 1, MerkleTree.LeafHash([]), At);
        Assert.Equal(
            "qc audit log\nqc.example\n1\nbjQLnP+zepicpUTmu3gKLHiQHT+zNzh2hRGjBhevoB0=\n2026-03-04T05:06:07.000000Z\n", head.Text);
        TreeHead? read = TreeHead.Parse(head.Text);
        Assert.NotNull(read);
        Assert.Equal(head.Text, read.Text);
    }

    [Fact]
    public void Every_changed_byte_of_the_signed_text_is_refused()
    {
        using ECDsa key = ECDsa.Create(ECCurve.NamedCurves.nistP256);
        string text = new TreeHead("qc.example", 12, MerkleTree.LeafHash([1]), At).Text;
        string signature = new TreeHead("qc.example", 12, MerkleTree.LeafHash([1]), At).Sign(key);
        Assert.True(TreeHead.Verify(text, signature, key));
        for (int i = 0; i < text.Length; i++)
        {
            char[] changed = text.ToCharArray();
            changed[i] = changed[i] == 'x' ? 'y' : 'x';
            Assert.False(TreeHead.Verify(new string(changed), signature, key));
        }
    }

    [Theory]
    [InlineData("")]
    [InlineData("not base64 !")]
    [InlineData("AAAA")]
    public void A_signature_that_is_none_is_refused(string signature)
    {
        using ECDsa key = ECDsa.Create(ECCurve.NamedCurves.nistP256);
        Assert.False(TreeHead.Verify(new TreeHead("qc.example", 0, new byte[32], At).Text, signature, key));
    }
}
