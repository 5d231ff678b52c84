namespace Qc.Benchmarks;

/// <summary>Reports: statistics too long for a test, printed with their bars.</summary>
internal static class Reports
{
    private static readonly Dictionary<string, Action<string[]>> Subjects = new(StringComparer.Ordinal)
    {
        ["lines"] = LineReport.Print,
        ["processing"] = ProcessingReport.Print,
    };

    /// <summary>A line of a report, numbers in the invariant culture.</summary>
    public static void Say(FormattableString line) => Console.WriteLine(FormattableString.Invariant(line));

    public static int Print(string subject, string[] arguments)
    {
        if (!Subjects.TryGetValue(subject, out Action<string[]>? report))
        {
            Console.Error.WriteLine($"There is no report on \"{subject}\"; there is: {string.Join(", ", Subjects.Keys)}.");
            return 2;
        }

        report(arguments);
        return 0;
    }
}
