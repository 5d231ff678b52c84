using System.Security.Cryptography;

namespace Qc.Service.Hosting;

/// <summary>The key that signs tree heads. Its public half is what a verifier needs.</summary>
public sealed class SiteKeys : IDisposable
{
    private SiteKeys(string folder, ECDsa logKey)
    {
        Folder = folder;
        LogKey = logKey;
    }

    /// <summary>Folder of the keys, readable by the service's account only.</summary>
    public string Folder { get; }

    /// <summary>ECDSA P-256 key for tree heads.</summary>
    public ECDsa LogKey { get; }

    /// <summary>Public key as PEM.</summary>
    public string PublicKeyPem => LogKey.ExportSubjectPublicKeyInfoPem();

    /// <summary>Loads the keys below a data folder, or makes them at the first start.</summary>
    public static SiteKeys Load(string dataFolder)
    {
        string folder = Path.Combine(dataFolder, "keys");
        Directory.CreateDirectory(folder);
        if (!OperatingSystem.IsWindows())
        {
            File.SetUnixFileMode(folder, UnixFileMode.UserRead | UnixFileMode.UserWrite | UnixFileMode.UserExecute);
        }

        string file = Path.Combine(folder, "audit-log.pem");
        ECDsa key = ECDsa.Create(ECCurve.NamedCurves.nistP256);
        if (File.Exists(file))
        {
            key.ImportFromPem(File.ReadAllText(file));
        }
        else
        {
            SecretFile.Write(file, key.ExportPkcs8PrivateKeyPem());
            File.WriteAllText(Path.Combine(folder, "audit-log.public.pem"), key.ExportSubjectPublicKeyInfoPem());
        }

        return new SiteKeys(folder, key);
    }

    /// <inheritdoc/>
    public void Dispose() => LogKey.Dispose();
}

/// <summary>Writes files that only the service's account may read.</summary>
internal static class SecretFile
{
    public static void Write(string path, string text)
    {
        using var writer = new StreamWriter(path, Options());
        writer.Write(text);
    }

    public static void Write(string path, byte[] bytes)
    {
        using var stream = new FileStream(path, Options());
        stream.Write(bytes);
    }

    private static FileStreamOptions Options()
    {
        var options = new FileStreamOptions { Mode = FileMode.Create, Access = FileAccess.Write };
        if (!OperatingSystem.IsWindows())
        {
            options.UnixCreateMode = UnixFileMode.UserRead | UnixFileMode.UserWrite;
        }

        return options;
    }
}
