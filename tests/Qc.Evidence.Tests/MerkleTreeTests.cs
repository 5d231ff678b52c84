using System.Security.Cryptography;
using Xunit;

namespace Qc.Evidence.Tests;

public class MerkleTreeTests
{
    // The widely used test set of RFC 6962 logs (eight leaves, SHA-256); roots for 0 to 8 leaves.
    private static readonly string[] Leaves =
        ["", "00", "10", "2021", "3031", "40414243", "5051525354555657", "606162636465666768696a6b6c6d6e6f"];

    private static readonly string[] Roots =
    [
        "e3b0c44298fc1c149afbf4c8996fb92427ae41e4649b934ca495991b7852b855",
        "6e340b9cffb37a989ca544e6bb780a2c78901d3fb33738768511a30617afa01d",
        "fac54203e7cc696cf0dfcb42c92a1d9dbaf70ad9e621f4bd8d98662f00e3c125",
        "aeb6bcfe274b70a14fb067a5e5578264db0fa9b51af5e0ba159158f329e06e77",
        "d37ee418976dd95753c1c73862b9398fa2a2cf9b4ff0fdfe8b30cd95209614b7",
        "4e3bbb1f7b478dcfe71fb631631519a3bca12c9aefca1612bfce4c13a86264d4",
        "76e67dadbcdf1e10e1b74ddc608abd2f98dfb16fbce75277b5232a127f2087ef",
        "ddb89be403809e325750d3d263cd78929c2942b7942a34b77e122c9594a74c8c",
        "5dc9da79a70659a9ad559cb701ded9a2ab9d823aad2f4960cfe370eff4604328",
    ];

    [Fact]
    public void Published_roots_are_reproduced()
    {
        Store store = Store.Of(Leaves.Select(Convert.FromHexString));
        for (int n = 0; n <= 8; n++)
        {
            Assert.Equal(Roots[n], Convert.ToHexStringLower(MerkleTree.Root(n, store.Read)));
        }
    }

    [Fact]
    public void The_published_inclusion_proof_of_the_first_of_eight_leaves_is_reproduced()
    {
        Store store = Store.Of(Leaves.Select(Convert.FromHexString));
        Assert.Equal(
            [
                "96a296d224f285c67bee93c30f8a309157f0daa35dc5b87e410b78630a09cfc7",
                "5f083f0a1a33ca076a95279832580db3e0ef4584bdff1f54c8a360f50de3031e",
                "6b47aaf29ee3c2af9af889bc1fb9254dabd31177f16232dd6aab035ca39bf6e4",
            ],
            MerkleTree.InclusionProof(0, 8, store.Read).Select(Convert.ToHexStringLower));
    }

    [Fact]
    public void Every_tree_up_to_40_leaves_has_the_root_of_the_recursive_definition_and_proofs_that_hold()
    {
        byte[][] contents = [.. Enumerable.Range(0, 40).Select(i => new[] { (byte)i })];
        Store store = Store.Of(contents);
        for (int n = 1; n <= 40; n++)
        {
            byte[] root = MerkleTree.Root(n, store.Read);
            Assert.Equal(SlowRoot(contents[..n]), root);
            for (int leaf = 0; leaf < n; leaf++)
            {
                IReadOnlyList<byte[]> path = MerkleTree.InclusionProof(leaf, n, store.Read);
                byte[] hash = MerkleTree.LeafHash(contents[leaf]);
                Assert.True(MerkleTree.VerifyInclusion(leaf, n, hash, path, root));
                Assert.False(MerkleTree.VerifyInclusion(leaf, n, MerkleTree.LeafHash([99]), path, root));
                Assert.False(n > 1 && MerkleTree.VerifyInclusion((leaf + 1) % n, n, hash, path, root));
            }

            for (int old = 1; old <= n; old++)
            {
                IReadOnlyList<byte[]> proof = MerkleTree.ConsistencyProof(old, n, store.Read);
                Assert.True(MerkleTree.VerifyConsistency(old, n, MerkleTree.Root(old, store.Read), root, proof));
                Assert.False(MerkleTree.VerifyConsistency(old, n, MerkleTree.LeafHash([77]), root, proof));
            }
        }
    }

    [Fact]
    public void Every_changed_bit_of_a_proof_is_refused()
    {
        Store store = Store.Of(Enumerable.Range(0, 13).Select(i => new[] { (byte)i }));
        byte[] root = MerkleTree.Root(13, store.Read);
        byte[] old = MerkleTree.Root(6, store.Read);
        byte[][] path = [.. MerkleTree.InclusionProof(5, 13, store.Read)];
        byte[][] proof = [.. MerkleTree.ConsistencyProof(6, 13, store.Read)];
        byte[] leaf = MerkleTree.LeafHash([5]);
        ForEveryBit(path, () => Assert.False(MerkleTree.VerifyInclusion(5, 13, leaf, path, root)));
        ForEveryBit(proof, () => Assert.False(MerkleTree.VerifyConsistency(6, 13, old, root, proof)));
        Assert.False(MerkleTree.VerifyInclusion(5, 13, leaf, path[..^1], root));
        Assert.False(MerkleTree.VerifyInclusion(5, 13, leaf, [.. path, root], root));
    }

    private static void ForEveryBit(byte[][] hashes, Action check)
    {
        foreach (byte[] original in hashes.ToArray())
        {
            int place = Array.IndexOf(hashes, original);
            for (int bit = 0; bit < 8 * original.Length; bit++)
            {
                byte[] changed = (byte[])original.Clone();
                changed[bit / 8] ^= (byte)(1 << (bit % 8));
                hashes[place] = changed;
                check();
            }

            hashes[place] = original;
        }
    }

    private static byte[] SlowRoot(byte[][] contents)
    {
        if (contents.Length == 1)
        {
            return SHA256.HashData([0, .. contents[0]]);
        }

        int split = 1;
        while (2 * split < contents.Length)
        {
            split *= 2;
        }

        return SHA256.HashData([1, .. SlowRoot(contents[..split]), .. SlowRoot(contents[split..])]);
    }

    private sealed class Store
    {
        private readonly Dictionary<(int, long), byte[]> _nodes = [];

        public static Store Of(IEnumerable<byte[]> contents)
        {
            var store = new Store();
            long index = 0;
            foreach (byte[] content in contents)
            {
                foreach ((int level, long place, byte[] hash) in MerkleTree.NodesFinishedBy(index, MerkleTree.LeafHash(content), store.Read))
                {
                    store._nodes.Add((level, place), hash);
                }

                index++;
            }

            return store;
        }

        public byte[] Read(int level, long index) => _nodes[(level, index)];
    }
}
