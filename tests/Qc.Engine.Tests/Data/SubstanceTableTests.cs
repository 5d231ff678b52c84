using System.Collections.Immutable;
using Qc.Engine.Data;
using Xunit;

namespace Qc.Engine.Tests.Data;

/// <summary>Truth: Gottlieb, Kotlyar, Nudelman 1997 and Fulmer et al. 2010, as stated beside each case.</summary>
public class SubstanceTableTests
{
    [Theory]
    [InlineData("CDCl3", 7.26, "s", 0)]
    [InlineData("DMSO-d6", 2.50, "quint-D", 1.9)]
    [InlineData("acetone-d6", 2.05, "quint-D", 2.2)]
    [InlineData("CD3CN", 1.94, "quint-D", 2.5)]
    [InlineData("CD3OD", 3.31, "quint-D", 1.65)]
    [InlineData("CD2Cl2", 5.32, "trip-D", 1.1)]
    [InlineData("D2O", 4.79, "s", 0)]
    public void HasTheResidualSignalOfEachSolvent(string solvent, double ppm, string pattern, double hertz) =>
        Assert.Contains(SubstanceTable.In(solvent), r => r.Role == "solvent" && r.ShiftPpm == ppm && r.Multiplicity == pattern && r.Hertz == hertz);

    [Theory]
    [InlineData("acetonitrile", "C6D6", 1.55)]
    [InlineData("2-propanol", "CD3OD", 1.50)]
    [InlineData("2-butanone", "D2O", 3.18)]
    public void UsesNoKnownMisprint(string substance, string solvent, double printed) =>
        Assert.DoesNotContain(SubstanceTable.In(solvent), r => r.Substance == substance && r.ShiftPpm == printed);

    [Theory]
    [InlineData("chloroform-d", "CDCl3")]
    [InlineData("CDCl3", "CDCl3")]
    [InlineData("DMSO", "DMSO-d6")]
    [InlineData("(CD3)2SO", "DMSO-d6")]
    [InlineData("MeOD", "CD3OD")]
    [InlineData("H2O+D2O", "D2O")]
    [InlineData("Acetone", "acetone-d6")]
    [InlineData("THF", "THF-d8")]
    [InlineData("pentane", null)]
    [InlineData(null, null)]
    public void KnowsSolventLabelsAsHeadersWriteThem(string? label, string? solvent) =>
        Assert.Equal(solvent, SubstanceTable.Normalise(label));

    [Fact]
    public void HoldsOnlyPlausibleRows()
    {
        Assert.NotEmpty(SubstanceTable.Solvents);
        foreach (SubstanceSignal row in SubstanceTable.Solvents.SelectMany(s => SubstanceTable.In(s)))
        {
            Assert.InRange(row.ShiftPpm, -0.5, 14);
            Assert.True(row.Protons > 0, $"{row}");
            Assert.Contains(row.Role, ImmutableArray.Create("solvent", "water", "reference", "impurity"));
            Assert.True(row.Multiplicity is not ("d" or "t" or "q" or "sept" or "quint-D" or "trip-D") || row.Hertz > 0, $"{row}");
        }
    }
}
