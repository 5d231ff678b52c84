namespace Qc.Service.Hosting;

/// <summary>What the command line and the configuration say.</summary>
public sealed record QcOptions
{
    /// <summary>Command-line switch of the demo.</summary>
    public const string DemoSwitch = "--demo";

    /// <summary>Whether to load the demo plant.</summary>
    public bool Demo { get; init; }

    /// <summary>Folder for keys, logs and the private database.</summary>
    public required string DataFolder { get; init; }

    /// <summary>Connection of the database owner, for migrations; null to run the private server.</summary>
    public string? OwnerConnection { get; init; }

    /// <summary>Connection of the application.</summary>
    public string? ApplicationConnection { get; init; }

    /// <summary>RabbitMQ for several workers; null for one process.</summary>
    public string? RabbitMq { get; init; }

    /// <summary>Name of the site on tree heads and certificates.</summary>
    public string Site { get; init; } = "Qc site";

    /// <summary>Address under which others reach this service, without a stroke at its end; printed on certificates.</summary>
    public string? PublicUrl { get; init; }

    /// <summary>Largest request body in bytes.</summary>
    public long LargestBodyBytes { get; init; } = 100L * 1024 * 1024;

    /// <summary>Whether callbacks may go to this host itself; so where it is a laptop with its private database.</summary>
    public bool CallbacksToThisHost { get; init; }

    /// <summary>Reads them.</summary>
    public static QcOptions From(IConfiguration configuration, string[] args, string contentRoot) => new()
    {
        Demo = args.Contains(DemoSwitch, StringComparer.Ordinal),
        DataFolder = Path.GetFullPath(configuration["data"] ?? configuration["Qc:DataFolder"] ?? Path.Combine(contentRoot, ".qc")),
        OwnerConnection = configuration.GetConnectionString("Owner") ?? FromFile(configuration["Qc:OwnerConnectionFile"]),
        ApplicationConnection = configuration.GetConnectionString("Application") ?? FromFile(configuration["Qc:ApplicationConnectionFile"]),
        RabbitMq = configuration["Qc:RabbitMq"],
        Site = configuration["Qc:Site"] ?? (args.Contains(DemoSwitch, StringComparer.Ordinal) ? Qc.Service.Demo.DemoPlant.Site : "Qc site"),
        PublicUrl = (configuration["Qc:PublicUrl"] ?? configuration["urls"]?.Split(';')[0])?.TrimEnd('/'),
        CallbacksToThisHost = configuration.GetValue<bool?>("Qc:CallbacksToThisHost") ?? configuration.GetConnectionString("Application") is null,
        LargestBodyBytes = configuration.GetValue<long?>("Qc:LargestBodyBytes") ?? 100L * 1024 * 1024,
    };

    /// <summary>Secrets may come from files, as container platforms mount them.</summary>
    private static string? FromFile(string? path) => path is null ? null : File.ReadAllText(path).Trim();
}
