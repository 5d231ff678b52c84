using Microsoft.EntityFrameworkCore;
using Qc.Evidence;
using Qc.Records;
using Qc.Records.Audit;
using Qc.Service.Hosting;

namespace Qc.Service.Features.Audit;

/// <summary>A signed tree head.</summary>
public sealed record SignedHead(long Size, string RootHex, DateTimeOffset At, string Text, string Signature);

/// <summary>
/// Takes signed heads of the audit log; each one handed out is kept in the database, and the newest beside the key as well, so
/// that the service does not put its signature under a log that was rewritten in the database.
/// </summary>
public sealed class SignedHeads(QcDbContext context, SiteKeys keys, QcOptions options)
{
    private static readonly Lock KeepLock = new();

    /// <summary>The head now. Where nothing was added since the last, that one is answered again.</summary>
    /// <exception cref="InvalidOperationException">The log no longer begins with the entries signed last.</exception>
    public async Task<SignedHead> TakeAsync(CancellationToken cancellation)
    {
        long size = await context.AuditSizeAsync(cancellation);
        TreeHeadRow? last = await context.TreeHeads.AsNoTracking().Where(h => h.Size == size).OrderByDescending(h => h.At).FirstOrDefaultAsync(cancellation);
        if (last is null)
        {
            byte[] root = MerkleTree.Root(size, context.NodeReader());
            RefuseRewritten(size);
            var head = new TreeHead(options.Site, size, root, await context.DatabaseTimeAsync(cancellation));
            last = new TreeHeadRow { Size = size, At = head.At, RootHash = root, SignedText = head.Text, Signature = head.Sign(keys.LogKey) };
            context.TreeHeads.Add(last);
            await context.SaveChangesAsync(cancellation);
            Keep(head);
        }

        return new SignedHead(last.Size, Convert.ToHexStringLower(last.RootHash), last.At, last.SignedText, last.Signature);
    }

    private string File => Path.Combine(keys.Folder, "last-head.txt");

    private TreeHead? Kept() => System.IO.File.Exists(File) ? TreeHead.Parse(System.IO.File.ReadAllText(File)) : null;

    private void RefuseRewritten(long size)
    {
        TreeHead? kept;
        lock (KeepLock)
        {
            kept = Kept();
        }

        if (kept is not null && (kept.Size > size || !MerkleTree.Root(kept.Size, context.NodeReader()).AsSpan().SequenceEqual(kept.Root)))
        {
            throw new InvalidOperationException(
                $"The audit log was rewritten or cut: it does not begin with the {kept.Size} entries signed at {kept.At:u}. Nothing is signed until this is resolved ({File}).");
        }
    }

    /// <summary>Several requests may take heads at once; the largest stays.</summary>
    private void Keep(TreeHead head)
    {
        lock (KeepLock)
        {
            if (Kept() is not { } kept || kept.Size < head.Size)
            {
                string next = File + ".next";
                System.IO.File.WriteAllText(next, head.Text);
                System.IO.File.Move(next, File, overwrite: true);
            }
        }
    }
}
