namespace Qc.EndToEnd.Tests;

/// <summary>Where the tests run from.</summary>
internal static class Repository
{
    /// <summary>The folder of Qc.sln.</summary>
    public static string Root { get; } = Find();

    private static string Find()
    {
        DirectoryInfo? folder = new(AppContext.BaseDirectory);
        while (folder is not null && !File.Exists(Path.Combine(folder.FullName, "Qc.sln")))
        {
            folder = folder.Parent;
        }

        return folder?.FullName ?? throw new InvalidOperationException("The repository root was not found.");
    }
}
