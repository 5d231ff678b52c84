using System.Security.Cryptography;
using Microsoft.Extensions.Logging;

namespace Qc.Records.PrivateServer;

/// <summary>
/// Where the private server keeps its cluster, and the lock that lets only one service use it. The place is below the data
/// folder, unless the service is root and the server's account cannot pass through to it (a data folder below /root, say):
/// then it is below /var/lib, which only root can write, and the data folder says where.
/// </summary>
internal sealed class ServerFolder : IDisposable
{
    private const string Elsewhere = "/var/lib/qc-postgresql";
    private readonly FileStream _lock;

    private ServerFolder(string path, FileStream held)
    {
        Path = path;
        _lock = held;
    }

    /// <summary>The place.</summary>
    public string Path { get; }

    /// <summary>The cluster in it.</summary>
    public string Cluster => System.IO.Path.Combine(Path, "cluster");

    /// <summary>Finds or makes the place and takes it; it is given back on disposal and by the system when this process ends.</summary>
    /// <exception cref="PrivatePostgresException">Another process uses it, or it cannot be made.</exception>
    public static ServerFolder Take(string dataFolder, ILogger? logger)
    {
        Directory.CreateDirectory(dataFolder);
        string path = Find(dataFolder, logger);
        try
        {
            Directory.CreateDirectory(path);
            LetServerPass(path);
        }
        catch (Exception e) when (e is IOException or UnauthorizedAccessException)
        {
            throw new PrivatePostgresException(
                $"{path} cannot be made ({e.Message}). Choose a data folder whose parent folders every account may pass through, or do not run as root.", e);
        }

        try
        {
            string file = System.IO.Path.Combine(path, "in-use");
            return new ServerFolder(path, new FileStream(file, FileMode.OpenOrCreate, FileAccess.ReadWrite, FileShare.None));
        }
        catch (IOException e)
        {
            throw new PrivatePostgresException($"Another process already runs a private PostgreSQL in {path}.", e);
        }
    }

    /// <inheritdoc/>
    public void Dispose() => _lock.Dispose();

    /// <summary>Others may pass through, whatever the umask; they may not list, and the password files stay their owner's.</summary>
    private static void LetServerPass(string path)
    {
        if (OperatingSystem.IsWindows() || !ServerAccount.IsNeeded)
        {
            return;
        }

        const UnixFileMode passable =
            UnixFileMode.UserRead | UnixFileMode.UserWrite | UnixFileMode.UserExecute | UnixFileMode.GroupExecute | UnixFileMode.OtherExecute;
        File.SetUnixFileMode(path, passable);
        if (System.IO.Path.GetDirectoryName(path) == Elsewhere)
        {
            File.SetUnixFileMode(Elsewhere, passable);
        }
    }

    private static string Find(string dataFolder, ILogger? logger)
    {
        string wanted = System.IO.Path.Combine(dataFolder, "postgresql");
        string pointer = System.IO.Path.Combine(dataFolder, "postgresql-is-in");
        if (File.Exists(pointer))
        {
            return File.ReadAllText(pointer).Trim();
        }

        if (OperatingSystem.IsWindows() || !ServerAccount.IsNeeded || ServerAccount.CanReach(wanted))
        {
            return wanted;
        }

        // A name of its own for each data folder: one that was deleted and made anew must not find the old records.
        string instead = System.IO.Path.Combine(Elsewhere, Convert.ToHexStringLower(RandomNumberGenerator.GetBytes(8)));
        logger?.LogWarning("PostgreSQL does not run as root, and its account cannot reach {Wanted}; its data is kept in {Instead}", wanted, instead);
        File.WriteAllText(pointer, instead);
        return instead;
    }
}
