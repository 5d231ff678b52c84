using Xunit;

namespace Qc.Evidence.Tests;

public sealed class MerkleFrontierTests
{
    [Fact]
    public void The_root_is_that_of_the_recursive_definition_at_every_size()
    {
        var frontier = new MerkleFrontier();
        var leaves = new List<byte[]>();
        for (int n = 0; n <= 64; n++)
        {
            Assert.Equal(Slow(leaves, 0, n), frontier.Root());
            Assert.Equal(System.Numerics.BitOperations.PopCount((uint)n), frontier.Edge.Count);
            byte[] leaf = MerkleTree.LeafHash([(byte)n]);
            leaves.Add(leaf);
            frontier.Append(leaf);
        }
    }

    /// <summary>MTH as RFC 9162, 2.1.1 writes it.</summary>
    private static byte[] Slow(List<byte[]> leaves, int start, int count)
    {
        if (count == 0)
        {
            return System.Security.Cryptography.SHA256.HashData([]);
        }

        if (count == 1)
        {
            return leaves[start];
        }

        int split = 1;
        while (2 * split < count)
        {
            split *= 2;
        }

        return MerkleTree.NodeHash(Slow(leaves, start, split), Slow(leaves, start + split, count - split));
    }
}
