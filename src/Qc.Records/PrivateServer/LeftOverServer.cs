using System.Diagnostics;
using System.Globalization;
using Microsoft.Extensions.Logging;

namespace Qc.Records.PrivateServer;

/// <summary>What an earlier run that was killed may have left: a running server, or backends whose server is gone.</summary>
internal static class LeftOverServer
{
    private static readonly TimeSpan StopLimit = TimeSpan.FromSeconds(30);

    /// <summary>
    /// Stops it. The process id in postmaster.pid is only believed where that process is a PostgreSQL server of this
    /// cluster: after a restart of the machine it may belong to anybody.
    /// </summary>
    public static async Task StopAsync(string pgCtl, string cluster, ILogger? logger, CancellationToken cancellation)
    {
        string pidFile = Path.Combine(cluster, "postmaster.pid");
        if (ReadProcessId(pidFile) is { } id && IsServerOf(id, cluster))
        {
            logger?.LogWarning("A PostgreSQL server of an earlier run still uses {Cluster}; it is stopped", cluster);
            string limit = StopLimit.TotalSeconds.ToString(CultureInfo.InvariantCulture);
            (int exitCode, string output) = await ServerAccount.RunAsync(
                pgCtl, ["stop", "-D", cluster, "-m", "fast", "-w", "-t", limit], cancellation);
            if (exitCode != 0 && IsServerOf(id, cluster))
            {
                throw new PrivatePostgresException($"The server of an earlier run in {cluster} does not stop: {output}");
            }
        }

        await EndBackendsAsync(cluster, logger, cancellation);
        if (OperatingSystem.IsLinux())
        {
            // Nothing works in the cluster any more. PostgreSQL itself would believe the file where its id is now another
            // program's, and refuse to start.
            File.Delete(pidFile);
        }
    }

    /// <summary>
    /// Ends backends that outlived their server: in the middle of a query they do not notice that it is gone, and hold the
    /// shared memory that a new server refuses to share. Only where a process's folder can be asked for (Linux).
    /// </summary>
    public static async Task EndBackendsAsync(string cluster, ILogger? logger, CancellationToken cancellation)
    {
        foreach (Process backend in Process.GetProcesses())
        {
            using (backend)
            {
                if (IsPostgres(backend) && WorkingFolder(backend.Id) == cluster)
                {
                    logger?.LogWarning("A PostgreSQL backend without its server still uses {Cluster}; it is ended", cluster);
                    backend.Kill();
                    await backend.WaitForExitAsync(cancellation);
                }
            }
        }
    }

    private static int? ReadProcessId(string pidFile) =>
        File.Exists(pidFile)
        && int.TryParse(File.ReadLines(pidFile).FirstOrDefault(), NumberStyles.None, CultureInfo.InvariantCulture, out int id)
            ? id
            : null;

    private static bool IsServerOf(int id, string cluster)
    {
        try
        {
            using Process process = Process.GetProcessById(id);
            return IsPostgres(process) && (!OperatingSystem.IsLinux() || WorkingFolder(id) == cluster);
        }
        catch (Exception e) when (e is ArgumentException or InvalidOperationException)
        {
            // There is no such process, or it has just ended.
            return false;
        }
    }

    /// <summary>Backends carry more behind the name: "postgres: user database ...".</summary>
    private static bool IsPostgres(Process process) => process.ProcessName.StartsWith("postgres", StringComparison.Ordinal);

    /// <summary>A PostgreSQL process works in its cluster's folder; null where that cannot be known.</summary>
    private static string? WorkingFolder(int id)
    {
        try
        {
            return OperatingSystem.IsLinux() ? new FileInfo($"/proc/{id.ToString(CultureInfo.InvariantCulture)}/cwd").LinkTarget : null;
        }
        catch (Exception e) when (e is IOException or UnauthorizedAccessException)
        {
            // It ended, or belongs to another account.
            return null;
        }
    }
}
