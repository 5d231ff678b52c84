using System.Reflection;
using Xunit;

namespace Qc.Architecture.Tests;

/// <summary>Each room of the house references only rooms to its left.</summary>
public class ReferenceDirectionTests
{
    private static readonly Dictionary<string, string[]> Allowed = new(StringComparer.Ordinal)
    {
        ["Qc.Engine"] = [],
        ["Qc.Chemistry"] = ["Qc.Engine"],
        ["Qc.Evidence"] = [],
        ["Qc.Records"] = ["Qc.Evidence"],
        ["Qc.Certificates"] = ["Qc.Evidence"],
        ["Qc.Service"] = ["Qc.Engine", "Qc.Chemistry", "Qc.Evidence", "Qc.Records", "Qc.Certificates"],
        ["qc-verify"] = ["Qc.Evidence"],
    };

    /// <summary>What an engine that must give the same answer years later may not touch.</summary>
    private static readonly string[] ImpureAssemblies =
    [
        "System.Net.", "System.IO.FileSystem", "System.Data.", "Microsoft.EntityFrameworkCore", "Npgsql", "Microsoft.AspNetCore.",
        "System.Diagnostics.Process", "Microsoft.ClearScript",
    ];

    public static TheoryData<string> Assemblies => [.. Allowed.Keys];

    [Theory]
    [MemberData(nameof(Assemblies))]
    public void A_project_references_only_projects_to_its_left(string name)
    {
        string[] references = [.. References(name).Where(r => Allowed.ContainsKey(r) && r != name)];
        Assert.Empty(references.Except(Allowed[name]));
    }

    [Theory]
    [InlineData("Qc.Engine")]
    [InlineData("Qc.Evidence")]
    public void The_engine_and_the_evidence_core_reach_no_clock_file_network_or_database(string name)
    {
        string[] impure = [.. References(name).Where(r => ImpureAssemblies.Any(i => r.StartsWith(i, StringComparison.Ordinal)))];
        Assert.Empty(impure);
    }

    [Fact]
    public void Every_project_of_the_solution_is_listed_here()
    {
        string source = Path.Combine(Root(), "src");
        string[] folders = [.. Directory.GetDirectories(source).Select(f => Path.GetFileName(f)).Where(n => n.StartsWith("Qc.", StringComparison.Ordinal))];
        string[] listed = [.. Allowed.Keys.Select(k => k == "qc-verify" ? "Qc.Verify" : k)];
        Assert.Equal(folders.Order(), listed.Order());
    }

    private static IEnumerable<string> References(string name) =>
        Assembly.Load(name).GetReferencedAssemblies().Select(r => r.Name ?? "");

    private static string Root()
    {
        DirectoryInfo? folder = new(AppContext.BaseDirectory);
        while (folder is not null && !File.Exists(Path.Combine(folder.FullName, "Qc.sln")))
        {
            folder = folder.Parent;
        }

        return folder?.FullName ?? throw new InvalidOperationException("Qc.sln was not found above the tests.");
    }
}
