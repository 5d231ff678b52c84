using System.Collections.Immutable;
using Qc.Engine.Fitting;
using Qc.Engine.Prediction;
using Qc.Engine.Processing;
using Qc.Engine.Rivals;
using Qc.Engine.Structures;
using Qc.Engine.Tests.Structures;
using Xunit;
using Xunit.Abstractions;

namespace Qc.Engine.Tests.Rivals;

public class RivalScreenTests(StructureFixture structures, ITestOutputHelper output) : IClassFixture<StructureFixture>
{
    /// <summary>
    /// Spectra of which the truth is known: the predicted one with every shift displaced by up to one standard uncertainty.
    /// What the screen tells apart by itself (a log10 ratio of 4 and more) is not fitted in a lot check, so a full fit must not find
    /// that it was wrong about it.
    /// </summary>
    [Theory]
    [InlineData("CCCOC(C)=O", 400, 1)]
    [InlineData("CCCOC(C)=O", 60, 2)]
    [InlineData("CCC(C)=O", 300, 3)]
    [InlineData("COc1cc(C=O)ccc1O", 400, 4)]
    [InlineData("Cc1ccc(Cl)cc1", 300, 5)]
    [InlineData("CCOC(=O)c1ccccc1", 80, 6)]
    public void A_rival_that_the_screen_tells_apart_alone_is_told_apart_by_the_full_fit_too(string smiles, double frequencyMHz, int seed)
    {
        (Molecule structure, FitInput input, FitResult fit) = Measured(smiles, smiles, frequencyMHz, seed);
        ImmutableArray<ScreenedRival> ranked = RivalScreen.Rank(
            structure, input, fit, "CDCl3", Neighbours.Of(structure, new NeighbourOptions()).Candidates, default);
        Assert.NotEmpty(ranked);
        foreach (ScreenedRival rival in ranked.Where(r => r.Log10Ratio >= 4).Take(5))
        {
            double full = (fit.LogEvidence - SpectrumFit.Run(input with { Product = Expect(rival.Candidate.Structure) }).LogEvidence) / Math.Log(10);
            output.WriteLine($"{SmilesWriter.Write(rival.Candidate.Structure)} screen {rival.Log10Ratio:0.0} fit {full:0.0}");
            Assert.True(full >= 3, $"{SmilesWriter.Write(rival.Candidate.Structure)}: screen {rival.Log10Ratio}, fit {full}");
        }
    }

    /// <summary>The substance that is really there comes first, whatever it is taken for.</summary>
    [Theory]
    [InlineData("CCCOC(C)=O", "CC(C)OC(C)=O")]
    [InlineData("CCCOC(C)=O", "CCOC(=O)CC")]
    [InlineData("CCCCO", "CC(C)CO")]
    [InlineData("Cc1ccc(C)cc1", "CCc1ccccc1")]
    [InlineData("CCC(=O)CC", "CCCC(C)=O")]
    public void The_substance_that_is_there_is_the_nearest_rival_of_the_one_that_is_expected(string expected, string there)
    {
        (Molecule structure, FitInput input, FitResult fit) = Measured(expected, there, 400, 7);
        ImmutableArray<ScreenedRival> ranked = RivalScreen.Rank(
            structure, input, fit, "CDCl3", Neighbours.Of(structure, new NeighbourOptions()).Candidates, default);
        string form = StructureForm.Of(structures.Read(there));
        int rank = ranked.Select(r => StructureForm.Of(r.Candidate.Structure)).ToList().IndexOf(form);
        output.WriteLine($"rank {rank}, ratio {ranked[rank].Log10Ratio:0.0}");
        Assert.InRange(rank, 0, 4);
        Assert.True(ranked[rank].Log10Ratio < 0);
    }

    private (Molecule Structure, FitInput Input, FitResult Fit) Measured(string expected, string there, double frequencyMHz, int seed)
    {
        Molecule structure = structures.Read(expected);
        Expectation truth = Displaced(Expect(structures.Read(there)), seed);
        Spectrum spectrum = SimulatedSpectrum.Of(new SimulationConditions { FrequencyMHz = frequencyMHz, Seed = seed }, (truth, 1));
        var input = new FitInput { Spectrum = spectrum, Product = Expect(structure) };
        return (structure, input, SpectrumFit.Run(input));
    }

    private static Expectation Expect(Molecule molecule) => Predictor.Predict(molecule, Topicity.Groups(molecule), "CDCl3");

    private static Expectation Displaced(Expectation expectation, int seed)
    {
        var random = new Random(seed);
        return expectation with
        {
            Shifts = [.. expectation.Shifts.Select(s => s with { ShiftPpm = s.ShiftPpm + (((2 * random.NextDouble()) - 1) * s.StandardUncertaintyPpm) })],
        };
    }
}
