using System.Security.Cryptography;

namespace Qc.Evidence;

/// <summary>
/// The right edge of a growing Merkle tree: the roots of its complete subtrees, largest first, one for each bit set in the
/// size. It is all that is needed to append leaves and to know the root, so that a verifier reads a log of any length with
/// O(log n) memory. Example: size 6 = 4 + 2 keeps two hashes, over leaves 0 to 3 and over leaves 4 and 5.
/// </summary>
public sealed class MerkleFrontier
{
    private readonly List<byte[]> edge = [];

    /// <summary>Number of leaves.</summary>
    public long Size { get; private set; }

    /// <summary>Roots of the complete subtrees, largest first.</summary>
    public IReadOnlyList<byte[]> Edge => edge;

    /// <summary>Appends a leaf by its hash.</summary>
    public void Append(byte[] leafHash)
    {
        byte[] hash = leafHash;
        for (long rest = Size; (rest & 1) == 1; rest >>= 1)
        {
            hash = MerkleTree.NodeHash(edge[^1], hash);
            edge.RemoveAt(edge.Count - 1);
        }

        edge.Add(hash);
        Size++;
    }

    /// <summary>Root over the leaves so far: the edge folded from the right.</summary>
    public byte[] Root()
    {
        if (edge.Count == 0)
        {
            return SHA256.HashData([]);
        }

        byte[] hash = edge[^1];
        for (int i = edge.Count - 2; i >= 0; i--)
        {
            hash = MerkleTree.NodeHash(edge[i], hash);
        }

        return hash;
    }
}
