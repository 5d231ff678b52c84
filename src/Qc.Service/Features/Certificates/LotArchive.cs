using System.IO.Compression;
using System.Net;
using System.Text;
using System.Text.Json;
using System.Text.Json.Nodes;
using Microsoft.EntityFrameworkCore;
using Qc.Evidence;
using Qc.Records;
using Qc.Records.Audit;
using Qc.Records.Lots;
using Qc.Records.Products;
using Qc.Records.Reviews;
using Qc.Service.Features.Audit;
using Qc.Service.Hosting;
using Qc.Service.Http;

namespace Qc.Service.Features.Certificates;

/// <summary>
/// A whole lot in one zip that opens without the service: spectra as received, specification, reports, decisions, signatures,
/// certificates, and a proof for each audit entry; index.html tells what is what. The manifest is signed, see
/// <see cref="ArchiveManifest"/>; qc-verify archive checks it.
/// </summary>
public sealed class LotArchive(QcDbContext context, SignedHeads heads, SiteKeys keys)
{
    private static readonly JsonSerializerOptions Indented = new(Json.Options) { WriteIndented = true };

    /// <summary>The zip, or null where there is no such lot.</summary>
    public async Task<byte[]?> MakeAsync(string lotId, CancellationToken cancellation)
    {
        if (await context.Lots.AsNoTracking().SingleOrDefaultAsync(l => l.Id == lotId, cancellation) is not { } lot)
        {
            return null;
        }

        Product product = await context.Products.AsNoTracking().SingleAsync(p => p.Id == lot.ProductId, cancellation);
        SortedDictionary<string, byte[]> files = await FilesAsync(lot, product, cancellation);
        files["index.html"] = Encoding.UTF8.GetBytes(Index(lot, product, files.Keys));
        byte[] manifest = ArchiveManifest.Write(lotId, files);
        files[ArchiveManifest.FileName] = manifest;
        files[ArchiveManifest.SignatureName] = Encoding.ASCII.GetBytes(ArchiveManifest.Sign(manifest, keys.LogKey));
        using var zip = new MemoryStream();
        using (var archive = new ZipArchive(zip, ZipArchiveMode.Create, leaveOpen: true))
        {
            foreach ((string name, byte[] bytes) in files)
            {
                await using Stream entry = await archive.CreateEntry(name).OpenAsync(cancellation);
                await entry.WriteAsync(bytes, cancellation);
            }
        }

        return zip.ToArray();
    }

    private async Task<SortedDictionary<string, byte[]>> FilesAsync(Lot lot, Product product, CancellationToken cancellation)
    {
        var files = new SortedDictionary<string, byte[]>(StringComparer.Ordinal)
        {
            ["lot.json"] = Row(lot),
            ["product.json"] = Row(product),
            ["specification.json"] = Row(await context.SpecificationVersions.AsNoTracking().SingleAsync(s => s.Id == lot.SpecificationId, cancellation)),
            ["states.json"] = Row(await context.LotEvents.AsNoTracking().Where(e => e.LotId == lot.Id).OrderBy(e => e.Id).ToListAsync(cancellation)),
            ["public-key.pem"] = Encoding.ASCII.GetBytes(keys.PublicKeyPem),
        };
        foreach (LotSpectrum s in await context.LotSpectra.AsNoTracking().Where(s => s.LotId == lot.Id).ToListAsync(cancellation))
        {
            files[$"spectra/{s.Number}.{(s.Format == "jcamp-dx" ? "dx" : s.Format)}"] = s.Bytes;
        }

        foreach (Computation c in await context.Computations.AsNoTracking().Where(c => c.LotId == lot.Id).ToListAsync(cancellation))
        {
            files[$"reports/{c.Number}.json"] = Encoding.UTF8.GetBytes(c.ReportJson);
        }

        foreach (Certificate c in await context.Certificates.AsNoTracking().Where(c => c.LotId == lot.Id).ToListAsync(cancellation))
        {
            files[$"certificates/{c.Number}.pdf"] = c.Pdf;
            files[$"certificates/{c.Number}.json"] = Encoding.UTF8.GetBytes(c.Json);
            files[$"certificates/{c.Number}.state.json"] = Row(await CertificateState.OfAsync(context, c.Number, cancellation));
        }

        var reviews = await (
            from r in context.Reviews.AsNoTracking()
            join s in context.Signatures on r.SignatureId equals s.Id
            where r.LotId == lot.Id
            select new { Review = r, Signature = s }).ToListAsync(cancellation);
        foreach (var r in reviews)
        {
            files[$"reviews/{r.Review.Number}.json"] = Row(r.Review);
            files[$"reviews/{r.Review.Number}.signature.json"] = Encoding.UTF8.GetBytes(r.Signature.StatementJson);
        }

        SignedHead head = await heads.TakeAsync(cancellation);
        MerkleTree.NodeReader read = context.NodeReader();
        foreach (AuditRow row in await context.AuditRows.AsNoTracking().Where(r => r.SubjectType == "lot" && r.SubjectId == lot.Id && r.Index < head.Size).ToListAsync(cancellation))
        {
            files[$"proofs/{row.Index}.json"] = LogProof.WriteInclusion(row.CanonicalJson, MerkleTree.InclusionProof(row.Index, head.Size, read), head.Text, head.Signature);
        }

        return files;
    }

    private static byte[] Row<T>(T row) => JsonSerializer.SerializeToUtf8Bytes(row, Indented);

    /// <summary>Plain HTML without script or anything from outside.</summary>
    private static string Index(Lot lot, Product product, IEnumerable<string> names)
    {
        var page = new StringBuilder();
        page.Append("<!DOCTYPE html>\n<html lang=\"en\"><head><meta charset=\"utf-8\"><title>Lot ").Append(Text(lot.LotNumber)).Append("</title></head><body>\n<h1>Lot ")
            .Append(Text(lot.LotNumber)).Append(" of ").Append(Text(product.Name)).Append(" (").Append(Text(product.Code)).Append(")</h1>\n<p>")
            .Append("Everything that was recorded of this lot: the spectra as received, the specification it was judged by, each report, decision and signature, ")
            .Append("the certificates, and a proof for each entry of the audit log. The file manifest.json lists the SHA-256 of each file and is signed; ")
            .Append("<code>qc-verify archive lot.zip --key public.pem</code> checks it, with the public key got from the laboratory, not from here.</p>\n<ul>\n");
        foreach (string name in names)
        {
            page.Append("<li><a href=\"").Append(Text(name)).Append("\">").Append(Text(name)).Append("</a></li>\n");
        }

        return page.Append("</ul>\n</body></html>\n").ToString();
    }

    private static string Text(string text) => WebUtility.HtmlEncode(text);
}
