using System.Security.Cryptography;

namespace Qc.Evidence;

/// <summary>
/// The append-only Merkle tree of RFC 9162, section 2.1 (the same tree as RFC 6962), with SHA-256.
/// Notation: MTH(D[n]) root over n leaves; leaf = H(0x00 ‖ d); node = H(0x01 ‖ left ‖ right); the split of n leaves is the
/// largest power of two below n. MTH of nothing is H("").
///
/// Storage comes from outside as a function (level, index) → hash of the complete subtree of 2^level leaves that begins at
/// leaf index·2^level. Complete subtrees never change, so an append writes each node once and a proof reads O(log n) of them.
///
/// Example: leaves "" and 0x00. leaf₀ = 6e340b9c…, leaf₁ = 96a296d2…, root = H(0x01 ‖ leaf₀ ‖ leaf₁) = fac54203….
/// </summary>
public static class MerkleTree
{
    /// <summary>Length of a hash in bytes.</summary>
    public const int HashLength = 32;

    /// <summary>Reads the hash of a complete subtree of 2^level leaves, index counted in such subtrees.</summary>
    public delegate byte[] NodeReader(int level, long index);

    /// <summary>Hash of a leaf's content.</summary>
    public static byte[] LeafHash(ReadOnlySpan<byte> content)
    {
        byte[] prefixed = new byte[content.Length + 1];
        content.CopyTo(prefixed.AsSpan(1));
        return SHA256.HashData(prefixed);
    }

    /// <summary>Hash of an inner node.</summary>
    public static byte[] NodeHash(ReadOnlySpan<byte> left, ReadOnlySpan<byte> right)
    {
        Span<byte> prefixed = stackalloc byte[1 + (2 * HashLength)];
        prefixed[0] = 1;
        left.CopyTo(prefixed[1..]);
        right.CopyTo(prefixed[(1 + HashLength)..]);
        return SHA256.HashData(prefixed);
    }

    /// <summary>
    /// The complete subtrees that appending a leaf finishes, from level 0 upwards: what a store has to write.
    /// </summary>
    /// <param name="leafIndex">Index of the new leaf: the size of the tree before it.</param>
    /// <param name="leafHash">Its hash.</param>
    /// <param name="read">Nodes written before.</param>
    public static IReadOnlyList<(int Level, long Index, byte[] Hash)> NodesFinishedBy(long leafIndex, byte[] leafHash, NodeReader read)
    {
        var nodes = new List<(int, long, byte[])> { (0, leafIndex, leafHash) };
        byte[] hash = leafHash;
        int level = 0;
        for (long index = leafIndex; (index & 1) == 1; index >>= 1)
        {
            hash = NodeHash(read(level, index - 1), hash);
            level++;
            nodes.Add((level, index >> 1, hash));
        }

        return nodes;
    }

    /// <summary>Root of the first <paramref name="size"/> leaves.</summary>
    public static byte[] Root(long size, NodeReader read)
    {
        ArgumentOutOfRangeException.ThrowIfNegative(size);
        return size == 0 ? SHA256.HashData([]) : RangeHash(0, size, read);
    }

    /// <summary>Audit path of a leaf in the tree of the first <paramref name="size"/> leaves (RFC 9162, 2.1.3.1), from the leaf upwards.</summary>
    /// <exception cref="ArgumentOutOfRangeException">The leaf is not in the tree.</exception>
    public static IReadOnlyList<byte[]> InclusionProof(long leafIndex, long size, NodeReader read)
    {
        ArgumentOutOfRangeException.ThrowIfNegative(leafIndex);
        ArgumentOutOfRangeException.ThrowIfGreaterThanOrEqual(leafIndex, size);
        var path = new List<byte[]>();
        Path(leafIndex, 0, size, read, path);
        return path;
    }

    /// <summary>Proof that the tree of <paramref name="oldSize"/> leaves is a prefix of that of <paramref name="newSize"/> (RFC 9162, 2.1.4.1).</summary>
    /// <exception cref="ArgumentOutOfRangeException">The old size is not between 1 and the new one.</exception>
    public static IReadOnlyList<byte[]> ConsistencyProof(long oldSize, long newSize, NodeReader read)
    {
        ArgumentOutOfRangeException.ThrowIfLessThan(oldSize, 1);
        ArgumentOutOfRangeException.ThrowIfGreaterThan(oldSize, newSize);
        var proof = new List<byte[]>();
        Subproof(oldSize, 0, newSize, true, read, proof);
        return proof;
    }

    /// <summary>Whether a path leads from a leaf to a root (RFC 9162, 2.1.3.2).</summary>
    public static bool VerifyInclusion(long leafIndex, long size, byte[] leafHash, IReadOnlyList<byte[]> path, byte[] root)
    {
        if (leafIndex < 0 || leafIndex >= size)
        {
            return false;
        }

        long fn = leafIndex;
        long sn = size - 1;
        byte[] hash = leafHash;
        foreach (byte[] sibling in path)
        {
            if (sn == 0 || sibling.Length != HashLength)
            {
                return false;
            }

            if ((fn & 1) == 1 || fn == sn)
            {
                hash = NodeHash(sibling, hash);
                while ((fn & 1) == 0 && fn != 0)
                {
                    fn >>= 1;
                    sn >>= 1;
                }
            }
            else
            {
                hash = NodeHash(hash, sibling);
            }

            fn >>= 1;
            sn >>= 1;
        }

        return sn == 0 && CryptographicOperations.FixedTimeEquals(hash, root);
    }

    /// <summary>Whether a proof shows that the new root only appends to the old one (RFC 9162, 2.1.4.2).</summary>
    public static bool VerifyConsistency(long oldSize, long newSize, byte[] oldRoot, byte[] newRoot, IReadOnlyList<byte[]> proof)
    {
        if (oldSize < 1 || oldSize > newSize || proof.Any(h => h.Length != HashLength))
        {
            return false;
        }

        if (oldSize == newSize)
        {
            return proof.Count == 0 && CryptographicOperations.FixedTimeEquals(oldRoot, newRoot);
        }

        List<byte[]> path = (oldSize & (oldSize - 1)) == 0 ? [oldRoot, .. proof] : [.. proof];
        if (path.Count == 0)
        {
            return false;
        }

        long fn = oldSize - 1;
        long sn = newSize - 1;
        while ((fn & 1) == 1)
        {
            fn >>= 1;
            sn >>= 1;
        }

        byte[] fr = path[0];
        byte[] sr = path[0];
        foreach (byte[] node in path.Skip(1))
        {
            if (sn == 0)
            {
                return false;
            }

            if ((fn & 1) == 1 || fn == sn)
            {
                fr = NodeHash(node, fr);
                sr = NodeHash(node, sr);
                while ((fn & 1) == 0 && fn != 0)
                {
                    fn >>= 1;
                    sn >>= 1;
                }
            }
            else
            {
                sr = NodeHash(sr, node);
            }

            fn >>= 1;
            sn >>= 1;
        }

        return sn == 0
            && CryptographicOperations.FixedTimeEquals(fr, oldRoot)
            && CryptographicOperations.FixedTimeEquals(sr, newRoot);
    }

    /// <summary>Hash over leaves [start, start + count): a stored node where the range is a complete subtree.</summary>
    private static byte[] RangeHash(long start, long count, NodeReader read)
    {
        if ((count & (count - 1)) == 0)
        {
            int level = (int)long.Log2(count);
            return read(level, start >> level);
        }

        long split = Split(count);
        return NodeHash(RangeHash(start, split, read), RangeHash(start + split, count - split, read));
    }

    private static void Path(long leaf, long start, long count, NodeReader read, List<byte[]> path)
    {
        if (count == 1)
        {
            return;
        }

        long split = Split(count);
        if (leaf < split)
        {
            Path(leaf, start, split, read, path);
            path.Add(RangeHash(start + split, count - split, read));
        }
        else
        {
            Path(leaf - split, start + split, count - split, read, path);
            path.Add(RangeHash(start, split, read));
        }
    }

    private static void Subproof(long old, long start, long count, bool whole, NodeReader read, List<byte[]> proof)
    {
        if (old == count)
        {
            if (!whole)
            {
                proof.Add(RangeHash(start, count, read));
            }

            return;
        }

        long split = Split(count);
        if (old <= split)
        {
            Subproof(old, start, split, whole, read, proof);
            proof.Add(RangeHash(start + split, count - split, read));
        }
        else
        {
            Subproof(old - split, start + split, count - split, false, read, proof);
            proof.Add(RangeHash(start, split, read));
        }
    }

    /// <summary>Largest power of two below n, n at least 2.</summary>
    private static long Split(long n) => 1L << (int)long.Log2(n - 1);
}
