using System.Diagnostics;
using System.Runtime.Versioning;

namespace Qc.Records.PrivateServer;

/// <summary>
/// The operating-system account that PostgreSQL runs under. PostgreSQL refuses to run as root, so where the service is
/// root the server runs as "nobody".
/// </summary>
internal static class ServerAccount
{
    private const string Unprivileged = "nobody";

    /// <summary>Whether another account has to be used.</summary>
    public static bool IsNeeded => !OperatingSystem.IsWindows() && Environment.IsPrivilegedProcess;

    /// <summary>A start of a program under the right account.</summary>
    public static ProcessStartInfo Start(string program, params IEnumerable<string> arguments)
    {
        var info = new ProcessStartInfo { UseShellExecute = false, RedirectStandardOutput = true, RedirectStandardError = true };
        if (IsNeeded)
        {
            // exec keeps the process id, so that the server can be watched as our child.
            info.FileName = "setpriv";
            foreach (string argument in new[] { $"--reuid={Unprivileged}", $"--regid={UnprivilegedGroup()}", "--clear-groups", "--", program })
            {
                info.ArgumentList.Add(argument);
            }
        }
        else
        {
            info.FileName = program;
        }

        foreach (string argument in arguments)
        {
            info.ArgumentList.Add(argument);
        }

        info.WorkingDirectory = Path.GetDirectoryName(program)!;
        info.Environment["LC_ALL"] = "C";
        return info;
    }

    /// <summary>Runs a program to its end and returns its exit code and what it printed.</summary>
    public static async Task<(int ExitCode, string Output)> RunAsync(
        string program, IEnumerable<string> arguments, CancellationToken cancellation)
    {
        using Process process = Process.Start(Start(program, arguments))
            ?? throw new PrivatePostgresException($"{program} could not be started.");
        Task<string> output = process.StandardOutput.ReadToEndAsync(cancellation);
        Task<string> errors = process.StandardError.ReadToEndAsync(cancellation);
        await process.WaitForExitAsync(cancellation);
        return (process.ExitCode, await output + await errors);
    }

    /// <summary>Gives a folder to the account that the server runs under.</summary>
    public static async Task GiveAsync(string folder, CancellationToken cancellation)
    {
        if (!IsNeeded)
        {
            return;
        }

        using Process process = Process.Start("chown", ["-R", $"{Unprivileged}:{UnprivilegedGroup()}", folder]);
        await process.WaitForExitAsync(cancellation);
        if (process.ExitCode != 0)
        {
            throw new PrivatePostgresException($"{folder} could not be given to the account {Unprivileged}.");
        }
    }

    /// <summary>Whether the account can reach a folder: all its parents may be passed through by others.</summary>
    [UnsupportedOSPlatform("windows")]
    public static bool CanReach(string folder)
    {
        for (DirectoryInfo? parent = new DirectoryInfo(folder).Parent; parent is not null; parent = parent.Parent)
        {
            if (parent.Exists && (File.GetUnixFileMode(parent.FullName) & UnixFileMode.OtherExecute) == 0)
            {
                return false;
            }
        }

        return true;
    }

    private static string UnprivilegedGroup() =>
        File.Exists("/etc/group") && File.ReadLines("/etc/group").Any(l => l.StartsWith("nogroup:", StringComparison.Ordinal))
            ? "nogroup"
            : Unprivileged;
}
