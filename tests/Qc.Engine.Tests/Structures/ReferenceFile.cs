namespace Qc.Engine.Tests.Structures;

/// <summary>Rows of a file under tests/reference; lines that begin with # state the origin.</summary>
internal static class ReferenceFile
{
    public static IEnumerable<string[]> Rows(string name, char separator)
    {
        DirectoryInfo? folder = new(AppContext.BaseDirectory);
        while (folder is not null && !Directory.Exists(Path.Combine(folder.FullName, "tests", "reference")))
        {
            folder = folder.Parent;
        }

        string path = Path.Combine(folder!.FullName, "tests", "reference", "structures", name);
        return File.ReadLines(path).Where(line => line.Length > 0 && line[0] != '#').Select(line => line.Split(separator));
    }
}
