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

    // SIGINT is PostgreSQL's fast shutdown: open transactions are rolled back, nothing committed is lost.
    private const string DeathSignal = "--pdeathsig=INT";

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

    /// <summary>
    /// A start of the server: in a session of its own, so that Ctrl+C at the terminal stops the service first and the
    /// database after it; and, where Linux can, ended with this process however that ends.
    /// </summary>
    public static ProcessStartInfo StartServer(string program, params IEnumerable<string> arguments)
    {
        ProcessStartInfo info = Start(program, arguments);
        if (!OperatingSystem.IsLinux())
        {
            return info;
        }

        if (IsNeeded)
        {
            info.ArgumentList.Insert(0, DeathSignal);
        }
        else if (Find("setpriv") is { } setpriv)
        {
            Wrap(info, setpriv, DeathSignal, "--");
        }

        if (Find("setsid") is { } setsid)
        {
            Wrap(info, setsid);
        }

        return info;
    }

    /// <summary>Runs a program to its end and returns its exit code and what it printed.</summary>
    public static async Task<(int ExitCode, string Output)> RunAsync(
        string program, IEnumerable<string> arguments, CancellationToken cancellation)
    {
        using Process process = Launch(Start(program, arguments));
        Task<string> output = process.StandardOutput.ReadToEndAsync(cancellation);
        Task<string> errors = process.StandardError.ReadToEndAsync(cancellation);
        await process.WaitForExitAsync(cancellation);
        return (process.ExitCode, await output + await errors);
    }

    private static Process Launch(ProcessStartInfo info)
    {
        try
        {
            return Process.Start(info) ?? throw new PrivatePostgresException($"{info.FileName} could not be started.");
        }
        catch (System.ComponentModel.Win32Exception e)
        {
            throw new PrivatePostgresException($"{info.FileName} could not be started: {e.Message}", e);
        }
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

    private static void Wrap(ProcessStartInfo info, string program, params string[] options)
    {
        string[] inner = [.. options, info.FileName, .. info.ArgumentList];
        info.FileName = program;
        info.ArgumentList.Clear();
        foreach (string argument in inner)
        {
            info.ArgumentList.Add(argument);
        }
    }

    private static string? Find(string program) =>
        (Environment.GetEnvironmentVariable("PATH") ?? "").Split(Path.PathSeparator, StringSplitOptions.RemoveEmptyEntries)
            .Select(folder => Path.Combine(folder, program)).FirstOrDefault(File.Exists);

    private static string UnprivilegedGroup() =>
        File.Exists("/etc/group") && File.ReadLines("/etc/group").Any(l => l.StartsWith("nogroup:", StringComparison.Ordinal))
            ? "nogroup"
            : Unprivileged;
}
