namespace Qc.Service.Hosting;

/// <summary>
/// Where the built browser modules lie: beside the published program, else in the project that it was built from. The current
/// folder does not matter, so that the service may be started from anywhere.
/// </summary>
internal static class WebRoot
{
    public static string? Find()
    {
        for (DirectoryInfo? folder = new(AppContext.BaseDirectory); folder is not null; folder = folder.Parent)
        {
            string candidate = Path.Combine(folder.FullName, "wwwroot");
            if (Directory.Exists(candidate))
            {
                return candidate;
            }
        }

        return null;
    }
}
