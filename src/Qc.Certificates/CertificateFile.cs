using System.Globalization;
using System.Security;
using System.Security.Cryptography;
using System.Text;
using PdfSharp.Pdf;

namespace Qc.Certificates;

/// <summary>
/// What makes the drawn pages a certificate file: attached data (PDF/A-3 association "Data"), XMP metadata, output intent,
/// and the signature field with room for the signature. The SHA-256 of the attachment stands in the metadata as
/// "data sha256 {hex}" (pdf:Keywords), inside what is signed.
/// </summary>
internal static class CertificateFile
{
    /// <summary>Name of the attachment.</summary>
    public const string AttachmentName = "certificate.json";

    /// <summary>Room for the signature in bytes: chain and a time stamp fit.</summary>
    public const int SignatureCapacity = 16384;

    /// <summary>Stands where the byte range will be; as long as any it may become.</summary>
    public const string ByteRangeRoom = "[0 0000000000 0000000000 0000000000]";

    /// <summary>SHA-256 of the attached bytes, lower-case hex.</summary>
    public static string AttachmentSha256(CertificateContent content) =>
        Convert.ToHexStringLower(SHA256.HashData(Encoding.UTF8.GetBytes(content.MachineReadableJson)));

    /// <summary>Adds all that and writes the file.</summary>
    public static byte[] Save(PdfDocument document, CertificateContent content)
    {
        document.Version = 17;
        // Its compressed streams lack their checksum, and strict readers complain.
        document.Options.NoCompression = true;
        document.Options.CompressContentStreams = false;
        document.Info.Title = $"Certificate {content.Number}";
        document.Info.Author = content.Laboratory;
        document.Info.Creator = $"Qc {content.ServiceVersion}";
        document.Info.CreationDate = content.IssuedAt.UtcDateTime;
        document.Info.ModificationDate = content.IssuedAt.UtcDateTime;
        document.Info.Keywords = Keywords(content);
        Attach(document, content);
        AddOutputIntent(document);
        AddSignatureField(document, content);
        PdfDictionary metadata = Stream(document, Metadata(content, document.Info), ("/Type", "/Metadata"), ("/Subtype", "/XML"));
        document.Pages[0].Elements["/Metadata"] = metadata.Reference; // What nothing refers to is not written.
        using var file = new MemoryStream();
        document.Save(file, false);
        return PointToMetadata(file.ToArray(), metadata.Reference!.ObjectNumber);
    }

    /// <summary>
    /// The library puts metadata of its own into the catalog when it saves; ours are written instead of the reference to
    /// them. Its number is the last in the file, so that ours is never longer and no offset changes.
    /// </summary>
    private static byte[] PointToMetadata(byte[] file, int number)
    {
        string text = Encoding.Latin1.GetString(file);
        int catalog = text.IndexOf("/Type/Catalog", StringComparison.Ordinal);
        int start = catalog < 0 ? -1 : text.IndexOf("/Metadata ", catalog, StringComparison.Ordinal);
        int end = start < 0 ? -1 : text.IndexOf(" R", start, StringComparison.Ordinal) + 2;
        string ours = string.Create(CultureInfo.InvariantCulture, $"/Metadata {number} 0 R");
        if (start < 0 || text.IndexOf("endobj", catalog, StringComparison.Ordinal) < end || ours.Length > end - start)
        {
            throw new InvalidOperationException("The catalog does not refer to metadata as expected.");
        }

        Encoding.ASCII.GetBytes(ours.PadRight(end - start)).CopyTo(file, start);
        return file;
    }

    private static string Keywords(CertificateContent content) => "data sha256 " + AttachmentSha256(content);

    private static void Attach(PdfDocument document, CertificateContent content)
    {
        byte[] bytes = Encoding.UTF8.GetBytes(content.MachineReadableJson);
        PdfDictionary stream = Stream(document, bytes, ("/Type", "/EmbeddedFile"), ("/Subtype", "/application/json"));
        var parameters = new PdfDictionary(document);
        parameters.Elements["/Size"] = new PdfInteger(bytes.Length);
        parameters.Elements["/ModDate"] = new PdfString(PdfDate(content.IssuedAt));
        stream.Elements["/Params"] = parameters;

        var embedded = new PdfDictionary(document);
        embedded.Elements["/F"] = stream.Reference;
        embedded.Elements["/UF"] = stream.Reference;
        PdfDictionary specification = Indirect(document, ("/Type", "/Filespec"), ("/AFRelationship", "/Data"));
        specification.Elements["/F"] = new PdfString(AttachmentName);
        specification.Elements["/UF"] = new PdfString(AttachmentName);
        specification.Elements["/Desc"] = new PdfString("The data of this certificate, for machines");
        specification.Elements["/EF"] = embedded;

        var files = new PdfDictionary(document);
        files.Elements["/Names"] = new PdfArray(document, new PdfString(AttachmentName), specification.Reference!);
        var names = new PdfDictionary(document);
        names.Elements["/EmbeddedFiles"] = files;
        document.Internals.Catalog.Elements["/Names"] = names;
        document.Internals.Catalog.Elements["/AF"] = new PdfArray(document, specification.Reference!);
    }

    private static void AddOutputIntent(PdfDocument document)
    {
        PdfDictionary profile = Stream(document, SrgbProfile.Bytes);
        profile.Elements["/N"] = new PdfInteger(3);
        PdfDictionary intent = Indirect(document, ("/Type", "/OutputIntent"), ("/S", "/GTS_PDFA1"));
        intent.Elements["/OutputConditionIdentifier"] = new PdfString("sRGB IEC61966-2.1");
        intent.Elements["/Info"] = new PdfString("sRGB IEC61966-2.1");
        intent.Elements["/DestOutputProfile"] = profile.Reference;
        document.Internals.Catalog.Elements["/OutputIntents"] = new PdfArray(document, intent.Reference!);
    }

    private static void AddSignatureField(PdfDocument document, CertificateContent content)
    {
        PdfDictionary signature = Indirect(
            document, ("/Type", "/Sig"), ("/Filter", "/Adobe.PPKLite"), ("/SubFilter", "/ETSI.CAdES.detached"));
        signature.Elements["/ByteRange"] = new PdfLiteral(ByteRangeRoom);
        signature.Elements["/Contents"] = new PdfLiteral("<" + new string('0', 2 * SignatureCapacity) + ">");
        signature.Elements["/M"] = new PdfString(PdfDate(content.IssuedAt));
        signature.Elements["/Reason"] = new PdfString($"Certificate {content.Number}");

        PdfDictionary field = Indirect(document, ("/Type", "/Annot"), ("/Subtype", "/Widget"), ("/FT", "/Sig"));
        field.Elements["/T"] = new PdfString("Signature");
        field.Elements["/V"] = signature.Reference;
        field.Elements["/Rect"] = new PdfLiteral("[0 0 0 0]");
        field.Elements["/F"] = new PdfInteger(132); // Printed and locked.
        field.Elements["/P"] = document.Pages[0].Reference;
        document.Pages[0].Elements["/Annots"] = new PdfArray(document, field.Reference!);

        PdfDictionary form = Indirect(document);
        form.Elements["/Fields"] = new PdfArray(document, field.Reference!);
        form.Elements["/SigFlags"] = new PdfInteger(3); // Signatures exist; append only.
        document.Internals.Catalog.Elements["/AcroForm"] = form.Reference;
    }

    private static byte[] Metadata(CertificateContent content, PdfDocumentInformation info)
    {
        string time = content.IssuedAt.UtcDateTime.ToString("yyyy-MM-ddTHH:mm:ssZ", CultureInfo.InvariantCulture);
        return Encoding.UTF8.GetBytes($"""
            <?xpacket begin="{'\uFEFF'}" id="W5M0MpCehiHzreSzNTczkc9d"?>
            <x:xmpmeta xmlns:x="adobe:ns:meta/"><rdf:RDF xmlns:rdf="http://www.w3.org/1999/02/22-rdf-syntax-ns#">
            <rdf:Description rdf:about="" xmlns:dc="http://purl.org/dc/elements/1.1/" xmlns:pdf="http://ns.adobe.com/pdf/1.3/" xmlns:xmp="http://ns.adobe.com/xap/1.0/" xmlns:pdfaid="http://www.aiim.org/pdfa/ns/id/">
            <pdfaid:part>3</pdfaid:part><pdfaid:conformance>B</pdfaid:conformance>
            <dc:format>application/pdf</dc:format>
            <dc:title><rdf:Alt><rdf:li xml:lang="x-default">{Xml(info.Title)}</rdf:li></rdf:Alt></dc:title>
            <dc:creator><rdf:Seq><rdf:li>{Xml(info.Author)}</rdf:li></rdf:Seq></dc:creator>
            <pdf:Producer>PDFsharp {typeof(PdfDocument).Assembly.GetName().Version!.ToString(3)}</pdf:Producer><xmp:CreatorTool>{Xml(info.Creator)}</xmp:CreatorTool>
            <pdf:Keywords>{Xml(info.Keywords)}</pdf:Keywords>
            <xmp:CreateDate>{time}</xmp:CreateDate><xmp:ModifyDate>{time}</xmp:ModifyDate>
            </rdf:Description></rdf:RDF></x:xmpmeta>
            <?xpacket end="r"?>
            """);
    }

    private static string Xml(string text) => SecurityElement.Escape(text);

    private static string PdfDate(DateTimeOffset at) =>
        at.UtcDateTime.ToString("'D:'yyyyMMddHHmmss'Z'", CultureInfo.InvariantCulture);

    private static PdfDictionary Stream(PdfDocument document, byte[] bytes, params (string, string)[] names)
    {
        PdfDictionary stream = Indirect(document, names);
        stream.CreateStream(bytes);
        return stream;
    }

    private static PdfDictionary Indirect(PdfDocument document, params (string Key, string Name)[] names)
    {
        var dictionary = new PdfDictionary(document);
        foreach ((string key, string name) in names)
        {
            dictionary.Elements[key] = new PdfName(name);
        }

        document.Internals.AddObject(dictionary);
        return dictionary;
    }
}
