using System.Security.Cryptography.X509Certificates;
using Qc.Evidence;

namespace Qc.Certificates.Tests;

/// <summary>Content for tests; the curves are computed Lorentzian lines, the product is ethyl acetate.</summary>
internal static class Sample
{
    public static readonly DateTimeOffset IssuedAt = new(2026, 5, 6, 7, 8, 9, TimeSpan.Zero);

    public static ReleaseToken Token(string lotId = "L1")
    {
        var signature = new SignatureStatement("Ana Lind", "ana", IssuedAt.AddHours(-1), SignatureMeaning.Approved, "lot", lotId, Hash('b'));
        var review = new ReviewFact("ana", "release", Hash('a'), [], Hash('b'), signature);
        return ReleaseDecision.Evaluate(new ReleaseCase(lotId, "reviewed", "pass", false, Hash('a'), "key:lims", false, [], [review])).Token!;
    }

    public static X509Certificate2 Certificate() => SiteKey.Create("Plant Nord", IssuedAt.AddDays(-1), IssuedAt.AddYears(3));

    public static byte[] Signed(CertificateContent? content = null)
    {
        using X509Certificate2 certificate = Certificate();
        return new CertificateSigner(certificate).Sign(CertificateRenderer.Render(content ?? Plain(), Token()));
    }

    public static CertificateContent Plain() => new()
    {
        Number = "QC-2026-000017",
        IssuedAt = IssuedAt,
        Laboratory = "Plant Nord, quality control laboratory",
        Product = new("A-1042", "Ethyl acetate", "CCOC(C)=O", "XEKOWRVHYACXOJ-UHFFFAOYSA-N", "C4H8O2", 88.106, Drawing()),
        Lot = new("L1", "26-0417", IssuedAt.AddDays(-1), IssuedAt.AddHours(-3), "bench-2", 80.0, "CDCl3"),
        Specification = "version 3, approved by Ana Lind on 2026-01-02",
        Verdict = "pass",
        Summary = "All expected protons were found where they are expected; nothing else was found above its limit.",
        ReportSha256 = Hash('a'),
        Findings =
        [
            new("identity.shift", "H-1", "The shift of H-1 agrees with the expected one.", "1.26 ppm ± 0.01", "1.05 to 1.45 ppm", "pass"),
            new("identity.count", "H-1", "The number of protons of H-1 agrees.", "2.98 H", "2.7 to 3.3 H", "pass"),
        ],
        Protons =
        [
            new("H-1", "3", "2.98", "1.25 ± 0.06", "1.26", "t, J = 7.1 Hz", ""),
            new("H-2", "2", "2.01", "4.10 ± 0.08", "4.12", "q, J = 7.1 Hz", ""),
            new("H-5", "3", "3.01", "2.03 ± 0.06", "2.05", "s", ""),
        ],
        Quantities = [new("assay", "99.4 % (m/m)", "0.6 % (m/m), k = 2")],
        OtherSubstances = [new("chloroform", "solvent", "not counted"), new("water", "water", "0.3 mol %")],
        Reviews = [new("release", "Ana Lind", IssuedAt.AddHours(-1), "Looked at the spectrum; nothing to object.")],
        Signatures = [new("Ana Lind", IssuedAt.AddHours(-1), "approved", Hash('c'))],
        Trace = Trace(),
        AuditHead = new(1234, Hash('d'), IssuedAt),
        Spectra = [new("proton", Hash('e'))],
        ServiceVersion = "0.1.0",
        EngineVersion = "0.1",
        VerificationUrl = "https://qc.example/certificates/QC-2026-000017",
        MachineReadableJson = """{"number":"QC-2026-000017","name":"żółć 北京"}""",
    };

    public static CertificateContent Long() => Plain() with
    {
        Laboratory = string.Join(' ', Enumerable.Repeat("Werk Süd der Vereinigten Riechstofffabriken", 8)),
        Product = Plain().Product with
        {
            Name = "北京 продукт Ωμέγα \u202Eevil\u202C " + new string('ж', 300),
            Smiles = string.Concat(Enumerable.Repeat("CC(C)(O)", 60)) + "C",
        },
        Findings =
        [
            .. Enumerable.Range(1, 90).Select(i => new FindingRow(
                "identity.shift.of.a.very.long.criterion", $"H-{i}", string.Join(' ', Enumerable.Repeat("The shift agrees.", i % 7 * 4)), "1.26 ppm", "1.05 to 1.45 ppm", "pass")),
            new("identity.remark", "all", string.Concat(Enumerable.Repeat("Very long remark without an end. ", 250)), "", "", "pass"),
        ],
    };

    public static string Hash(char digit) => new(digit, 64);

    private static StructureDrawing Drawing() => new(
        6, 3,
        [new(1, 1.6, 2, 1), new(2, 1, 3, 1.6), new(3, 1.6, 4, 1), new(4, 1, 5, 1.6), new(3.92, 1, 3.92, 0), new(4.08, 1, 4.08, 0)],
        [new(3, 1.6, "O"), new(4, 0, "O")]);

    private static CertificateTrace Trace()
    {
        const int Count = 16384;
        var measured = new float[Count];
        var modelled = new float[Count];
        (double Ppm, double Height)[] lines =
            [(7.26, 0.4), (1.17, 1), (1.26, 2), (1.35, 1), (2.05, 4), (3.99, .34), (4.08, 1), (4.17, 1), (4.26, .34), (1.56, 0.05)];
        var noise = new Random(7);
        for (int i = 0; i < Count; i++)
        {
            double ppm = 10 - (10.5 * i / Count);
            double sum = lines.Sum(l => l.Height / (1 + Math.Pow((ppm - l.Ppm) / 0.006, 2)));
            modelled[i] = (float)sum;
            measured[i] = (float)(sum + ((noise.NextDouble() - 0.5) * 0.02));
        }

        return new CertificateTrace(10, -10.5 / Count, measured, modelled, [.. measured.Zip(modelled, (a, b) => a - b)]);
    }
}
