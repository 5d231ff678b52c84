using System.Text;
using Qc.Engine.Reading;
using Qc.Records.People;

namespace Qc.Service.Demo;

/// <summary>A person of the demo plant.</summary>
internal sealed record DemoPerson(string User, string PrintedName, params IReadOnlyList<string> Roles);

/// <summary>A product of the demo plant.</summary>
/// <param name="Code">Code.</param>
/// <param name="Name">Name; also its name in demo-substances.tsv.</param>
/// <param name="Smiles">Structure.</param>
/// <param name="Solvent">Solvent.</param>
/// <param name="Specification">Specification as posted.</param>
internal sealed record DemoProduct(string Code, string Name, string Smiles, string Solvent, object Specification);

/// <summary>A lot of the demo plant.</summary>
/// <param name="Product">Product code.</param>
/// <param name="Lot">Lot number.</param>
/// <param name="Measurement">How it was measured.</param>
/// <param name="Contents">What is really in it, by amount.</param>
internal sealed record DemoLot(string Product, string Lot, DemoMeasurement Measurement, params (string Substance, double Amount)[] Contents)
{
    /// <summary>Solvent that the header claims, where it is not the true one.</summary>
    public string? HeaderSolvent { get; init; }

    /// <summary>Damage done to the file.</summary>
    public Func<string, string> Damage { get; init; } = text => text;

    /// <summary>What was weighed.</summary>
    public object? Sample { get; init; }

    /// <summary>Decision of the reviewer, where one was made.</summary>
    public string? Decision { get; init; }
}

/// <summary>An invented plant: Ferrybank Works. People, products, lots and spectra are made up.</summary>
internal static class DemoPlant
{
    public const string Site = "Ferrybank Works, QC laboratory (demo)";

    public static IReadOnlyList<DemoPerson> People { get; } =
    [
        new("ines.kolar", "Ines Kolar", Roles.Administrator),
        new("tomas.wren", "Tomas Wren", Roles.Submitter),
        new("ruth.adeyemi", "Ruth Adeyemi", Roles.Reviewer),
        new("jonas.pell", "Jonas Pell", Roles.Reviewer, Roles.Submitter),
        new("mara.linden", "Mara Linden", Roles.MethodOwner),
        new("otto.brandt", "Otto Brandt", Roles.QualityUnit),
        new("sofia.reyes", "Sofia Reyes", Roles.Auditor),
    ];

    public static IReadOnlyList<DemoProduct> Products { get; } =
    [
        new("A-1042", "propyl acetate", "CCCOC(C)=O", "CDCl3", new
        {
            rivals = new[] { new { name = "isopropyl acetate", smiles = "CC(C)OC(C)=O" }, new { name = "ethyl propanoate", smiles = "CCOC(=O)CC" } },
        }),
        new("A-1051", "isopropyl acetate", "CC(C)OC(C)=O", "CDCl3", new { releaseByException = true }),
        new("A-1077", "butyl acetate", "CCCCOC(C)=O", "CDCl3", new { }),
        new("B-2010", "ethyl benzoate", "CCOC(=O)c1ccccc1", "CDCl3", new { }),
        new("B-2017", "benzocaine", "CCOC(=O)c1ccc(N)cc1", "CDCl3", new { }),
        new("C-3003", "vanillin", "COc1cc(C=O)ccc1O", "CDCl3", new { }),
        new("C-3020", "dimethyl maleate", @"COC(=O)/C=C\C(=O)OC", "CDCl3", new { rivals = new[] { new { name = "dimethyl fumarate", smiles = "COC(=O)/C=C/C(=O)OC" } } }),
        new("D-4001", "paracetamol", "CC(=O)Nc1ccc(O)cc1", "DMSO-d6", new { assay = new { lowPercent = 98.0, highPercent = 102.0 } }),
    ];

    public static IReadOnlyList<DemoLot> Lots { get; } =
    [
        new("A-1042", "26-0411", Field(400, 1), ("propyl acetate", 1)) { Decision = "release" },
        new("A-1042", "26-0417", Field(400, 2), ("isopropyl acetate", 1)) { Decision = "reject" },
        new("A-1042", "26-0423", Field(60, 3, width: 1.1), ("propyl acetate", 1)),
        new("A-1051", "26-0402", Field(500, 4), ("isopropyl acetate", 1)),
        new("A-1077", "26-0430", Field(400, 5), ("butyl acetate", 1), ("ethyl acetate", 0.06), ("toluene", 0.02)),
        new("A-1077", "26-0431", Field(400, 6, width: 5), ("butyl acetate", 1)),
        new("B-2010", "26-0388", Field(400, 7), ("ethyl benzoate", 1)),
        new("B-2010", "26-0389", Field(400, 8), ("ethyl benzoate", 1)) { Damage = BreakCheckValue },
        new("B-2017", "26-0377", Field(500, 9), ("benzocaine", 1)),
        new("C-3003", "26-0391", Field(400, 10), ("vanillin", 1)) { HeaderSolvent = "DMSO-d6" },
        new("C-3003", "26-0395", Field(400, 11) with { SignalToNoise = 12 }, ("vanillin", 1)),
        new("C-3020", "26-0366", Field(400, 12), ("dimethyl maleate", 1)),
        new("C-3020", "26-0370", Field(400, 13), ("dimethyl fumarate", 1)),
        new("D-4001", "26-0350", Field(500, 14, "DMSO-d6"), ("paracetamol", 1), ("maleic acid", 0.5253))
        {
            Sample = new
            {
                massMg = 20.153,
                massStandardUncertaintyMg = 0.01,
                internalStandard = new { substance = "maleic acid", massMg = 8.148, purityPercent = 99.95, purityStandardUncertaintyPercent = 0.05 },
            },
        },
    ];

    /// <summary>The spectrum of a lot as a JCAMP-DX file.</summary>
    public static string File(DemoLot lot)
    {
        DemoMeasurement measurement = lot.Measurement;
        var contents = lot.Contents.ToList();
        contents.Add(("TMS", 0.02));
        contents.Add(("water", 0.03));
        if (measurement.Solvent == "CDCl3")
        {
            contents.Add(("residual solvent", 0.05));
        }
        else
        {
            contents.Add(("residual DMSO", 0.1));
        }

        double[] intensity = DemoSpectrum.Make(measurement, [.. contents]);
        double highest = intensity.Max(Math.Abs);
        double[] scaled = [.. intensity.Select(y => Math.Round(y / highest * 1e8))];
        var spectrum = new SpectrumMeasurement(
            new AcquisitionFacts
            {
                Title = $"lot {lot.Lot}",
                Nucleus = "1H",
                ObserveFrequencyMHz = measurement.FrequencyMHz,
                SolventLabel = lot.HeaderSolvent ?? measurement.Solvent,
                RelaxationDelaySeconds = 30,
                AcquisitionTimeSeconds = 4,
                Scans = 16,
            },
            [],
            scaled,
            null,
            measurement.FirstPpm,
            DemoSpectrum.PpmPerPoint(measurement),
            AxisIsReferenced: true);
        return lot.Damage(Encoding.Latin1.GetString(JcampWriter.Write(spectrum)));
    }

    private static DemoMeasurement Field(double frequencyMHz, int seed, string solvent = "CDCl3", double width = 0.9) =>
        new(frequencyMHz, solvent, width, 1000, seed);

    /// <summary>Changes a digit within the table, as a damaged transfer would: a check value no longer fits.</summary>
    private static string BreakCheckValue(string text)
    {
        int table = text.IndexOf("##XYDATA", StringComparison.Ordinal);
        int line = text.IndexOf('\n', table + ((text.Length - table) / 2)) + 1;
        int digit = line;
        while (!char.IsAsciiDigit(text[digit]) || text[digit] == '9' || digit < line + 20)
        {
            digit++;
        }

        return text[..digit] + (char)(text[digit] + 1) + text[(digit + 1)..];
    }
}
