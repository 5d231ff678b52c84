using Qc.Engine.Prediction;
using Qc.Engine.Processing;
using Qc.Engine.Reading;
using Qc.Engine.Rivals;
using Qc.Engine.Structures;
using Qc.Engine.Tests.Structures;
using Qc.Engine.Verdicts;
using Xunit;
using Xunit.Abstractions;

namespace Qc.Engine.Tests.Rivals;

public class SpecificityTests(StructureFixture structures, ITestOutputHelper output) : IClassFixture<StructureFixture>
{
    [Fact]
    public void A_method_tells_esters_apart_and_says_from_where_it_notices_them()
    {
        double done = 0;
        SpecificityReport report = Specificity.Of(
            Named("CCCOC(C)=O"), [Named("CC(C)OC(C)=O")], "CDCl3", new Criteria(), new SimulationConditions(), 1, share => done = share, default);
        Write(report);
        Assert.Equal(2, report.Lines.Length);
        Assert.Equal(1, done);
        SpecificityLine isopropyl = report.Lines.Single(line => line.Smiles == "CC(C)OC(C)=O");
        Assert.True(isopropyl.ToldApart);

        // Its doublet of six protons stands free: 3 mol % in one region is reached at 3 * 10 / 6 = 5 mol %.
        Assert.Equal(5, isopropyl.NoticedFromMolPercent!.Value, 1.0);
    }

    [Fact]
    public void Vanillin_and_isovanillin_are_not_told_apart_by_their_predicted_spectra()
    {
        SpecificityReport report = Specificity.Of(
            Named("COc1cc(C=O)ccc1O"), [Named("COc1ccc(C=O)cc1O")], "CDCl3", new Criteria(), new SimulationConditions(), 0, null, default);
        Write(report);
        Assert.False(Assert.Single(report.Lines).ToldApart);
    }

    /// <summary>The whole check: a rival that cannot be told apart flags a right lot and is named, unless the method owner wants no generated rivals.</summary>
    [Theory]
    [InlineData("COc1cc(C=O)ccc1O", true, Outcome.Flag)]
    [InlineData("COc1cc(C=O)ccc1O", false, null)]
    [InlineData("CCCOC(C)=O", true, Outcome.Pass)]
    public void A_lot_check_names_the_isomer_that_it_cannot_tell_apart(string smiles, bool generate, Outcome? expected)
    {
        CheckReport report = LotCheck.Run(new CheckRequest
        {
            ProductName = "the product",
            Product = Named(smiles),
            Solvent = "CDCl3",
            Criteria = new Criteria { Identity = new IdentityCriteria { GeneratedRivals = generate } },
            Spectra = [new SubmittedSpectrum("proton", SpectrumFormat.JcampDx, Written(smiles))],
        });
        foreach (Finding finding in report.Findings.Where(f => f.Criterion == "identity.rivals" || f.Outcome == Outcome.Flag))
        {
            output.WriteLine($"{finding.Criterion} {finding.Outcome} {finding.Statement}");
        }

        Finding[] rivals = [.. report.Findings.Where(f => f.Criterion == "identity.rivals")];
        Assert.Equal(expected, rivals.Length == 0 ? null : rivals.Max(f => f.Outcome));
        Assert.Equal(expected == Outcome.Flag, rivals.Any(f => f.Statement.Contains("COc1ccc(C=O)cc1O", StringComparison.Ordinal)));
        Assert.True(report.Rivals.Length <= 10);
    }

    private byte[] Written(string smiles)
    {
        Molecule molecule = structures.Read(smiles);
        Spectrum spectrum = SimulatedSpectrum.Of(new SimulationConditions(), (Predictor.Predict(molecule, Topicity.Groups(molecule), "CDCl3"), 1));
        double scale = 1e8 / spectrum.Intensity.Max();
        return JcampWriter.Write(new SpectrumMeasurement(
            new AcquisitionFacts { Title = "simulated", Nucleus = "1H", ObserveFrequencyMHz = 400, SolventLabel = "CDCl3" },
            [],
            [.. spectrum.Intensity.Select(y => Math.Round(y * scale))],
            null,
            spectrum.FirstPpm,
            spectrum.PpmPerPoint,
            AxisIsReferenced: true));
    }

    private NamedStructure Named(string smiles) => new(smiles, smiles, structures.Read(smiles));

    private void Write(SpecificityReport report)
    {
        foreach (SpecificityLine line in report.Lines)
        {
            output.WriteLine($"{line.Smiles} ratio {line.Log10Ratio:0.0} told apart {line.ToldApart} noticed from {line.NoticedFromMolPercent:0.0} mol %");
        }
    }
}
