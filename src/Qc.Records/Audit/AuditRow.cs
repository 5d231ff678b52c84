namespace Qc.Records.Audit;

/// <summary>A stored audit entry: a leaf of the Merkle tree, with what it is searched by beside it.</summary>
public sealed class AuditRow
{
    /// <summary>Position in the log, from 0.</summary>
    public required long Index { get; init; }

    /// <summary>When.</summary>
    public required DateTimeOffset At { get; init; }

    /// <summary>Who.</summary>
    public required string Actor { get; init; }

    /// <summary>What was done.</summary>
    public required string Action { get; init; }

    /// <summary>To what kind of subject.</summary>
    public required string SubjectType { get; init; }

    /// <summary>To which.</summary>
    public required string SubjectId { get; init; }

    /// <summary>The canonical entry: the content of the leaf.</summary>
    public required string CanonicalJson { get; init; }

    /// <summary>Hash of the leaf.</summary>
    public required byte[] LeafHash { get; init; }

    /// <summary>The transaction that wrote it; set by the database, which so knows that a fact has its entry.</summary>
    public ulong TransactionId { get; private set; }
}

/// <summary>Hash of a complete subtree.</summary>
public sealed class MerkleNode
{
    /// <summary>Level: the subtree has 2^level leaves.</summary>
    public required int Level { get; init; }

    /// <summary>Index among the subtrees of its level.</summary>
    public required long Index { get; init; }

    /// <summary>Hash.</summary>
    public required byte[] Hash { get; init; }
}

/// <summary>A tree head that was signed and handed out.</summary>
public sealed class TreeHeadRow
{
    /// <summary>Number of entries.</summary>
    public required long Size { get; init; }

    /// <summary>When it was signed.</summary>
    public required DateTimeOffset At { get; init; }

    /// <summary>Root hash.</summary>
    public required byte[] RootHash { get; init; }

    /// <summary>Text that was signed.</summary>
    public required string SignedText { get; init; }

    /// <summary>Signature, base64.</summary>
    public required string Signature { get; init; }
}
