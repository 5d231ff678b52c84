using Xunit;

namespace Qc.Architecture.Tests;

/// <summary>A file is one thought: none is longer than 500 lines.</summary>
public class FileSizeTests
{
    [Fact]
    public void No_source_file_is_longer_than_500_lines()
    {
        DirectoryInfo? folder = new(AppContext.BaseDirectory);
        while (folder is not null && !File.Exists(Path.Combine(folder.FullName, "Qc.sln")))
        {
            folder = folder.Parent;
        }

        Assert.NotNull(folder);
        string[] files =
        [
            .. new[] { "src", "tests" }
                .SelectMany(d => Directory.EnumerateFiles(Path.Combine(folder.FullName, d), "*.*", SearchOption.AllDirectories))
                .Where(f => f.EndsWith(".cs", StringComparison.Ordinal) || f.EndsWith(".ts", StringComparison.Ordinal))
                .Where(f => !f.Contains($"{Path.DirectorySeparatorChar}obj{Path.DirectorySeparatorChar}", StringComparison.Ordinal)
                    && !f.Contains($"{Path.DirectorySeparatorChar}bin{Path.DirectorySeparatorChar}", StringComparison.Ordinal)
                    && !f.Contains($"{Path.DirectorySeparatorChar}Migrations{Path.DirectorySeparatorChar}", StringComparison.Ordinal)),
        ];
        Assert.True(files.Length > 50, "The sources were not found.");
        Assert.All(files, f => Assert.True(File.ReadLines(f).Count() <= 500, $"{f} is longer than 500 lines."));
    }
}
