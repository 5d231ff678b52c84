using Microsoft.EntityFrameworkCore;
using Qc.Evidence;
using Qc.Records;
using Qc.Records.Audit;
using Qc.Service.Hosting;

namespace Qc.Service.Features.Audit;

/// <summary>A signed tree head.</summary>
public sealed record SignedHead(long Size, string RootHex, DateTimeOffset At, string Text, string Signature);

/// <summary>Takes signed heads of the audit log; each one handed out is kept.</summary>
public sealed class SignedHeads(QcDbContext context, SiteKeys keys, QcOptions options)
{
    /// <summary>The head now. Where nothing was added since the last, that one is answered again.</summary>
    public async Task<SignedHead> TakeAsync(CancellationToken cancellation)
    {
        long size = await context.AuditSizeAsync(cancellation);
        TreeHeadRow? last = await context.TreeHeads.AsNoTracking().Where(h => h.Size == size).OrderByDescending(h => h.At).FirstOrDefaultAsync(cancellation);
        if (last is null)
        {
            byte[] root = MerkleTree.Root(size, context.NodeReader());
            var head = new TreeHead(options.Site, size, root, await context.DatabaseTimeAsync(cancellation));
            last = new TreeHeadRow { Size = size, At = head.At, RootHash = root, SignedText = head.Text, Signature = head.Sign(keys.LogKey) };
            context.TreeHeads.Add(last);
            await context.SaveChangesAsync(cancellation);
        }

        return new SignedHead(last.Size, Convert.ToHexStringLower(last.RootHash), last.At, last.SignedText, last.Signature);
    }
}
