using System.IO.Compression;
using System.Security.Cryptography;
using Qc.Evidence;

namespace Qc.Verify;

/// <summary>Checks the archive of a lot.</summary>
internal static class ArchiveCheck
{
    private const long LargestBytes = 1L << 30;

    public static Verification Verify(byte[] zip, ECDsa publicKey)
    {
        try
        {
            using var archive = new ZipArchive(new MemoryStream(zip), ZipArchiveMode.Read);
            if (archive.Entries.Sum(e => e.Length) > LargestBytes)
            {
                return new Verification(false, "The archive is larger than any that the service writes.");
            }

            var files = new Dictionary<string, byte[]>(StringComparer.Ordinal);
            foreach (ZipArchiveEntry entry in archive.Entries)
            {
                using Stream stream = entry.Open();
                byte[] bytes = new byte[entry.Length];
                stream.ReadExactly(bytes);
                if (!files.TryAdd(entry.FullName, bytes))
                {
                    return new Verification(false, $"{entry.FullName} is there twice.");
                }
            }

            return ArchiveManifest.Verify(files, publicKey);
        }
        catch (Exception e) when (e is InvalidDataException or EndOfStreamException)
        {
            return new Verification(false, "The file is not a whole zip archive.");
        }
    }
}
