using Qc.Engine.Rivals;
using Qc.Engine.Structures;
using Qc.Engine.Tests.Structures;
using Xunit;
using Xunit.Abstractions;

namespace Qc.Engine.Tests.Rivals;

public class NeighboursTests(StructureFixture structures, ITestOutputHelper output) : IClassFixture<StructureFixture>
{
    private static readonly NeighbourOptions EditsOnly = new() { MostHeavyAtomsListed = 0 };

    /// <summary>Mix-ups that a laboratory knows; each must be found by edits alone.</summary>
    [Theory]
    [InlineData("CCCOC(C)=O", "CC(C)OC(C)=O", RivalOrigin.OneEdit)]
    [InlineData("CCCOC(C)=O", "CCOC(=O)CC", RivalOrigin.OneEdit)]
    [InlineData("CCCOC(C)=O", "COC(=O)CCC", RivalOrigin.OneEdit)]
    [InlineData("CCCOC(C)=O", "CCCCOC=O", RivalOrigin.OneEdit)]
    [InlineData("CCCCOC(C)=O", "CC(C)COC(C)=O", RivalOrigin.OneEdit)]
    [InlineData("CCCCOC(C)=O", "CCC(C)OC(C)=O", RivalOrigin.OneEdit)]
    [InlineData("CCCCOC(C)=O", "CC(C)(C)OC(C)=O", RivalOrigin.TwoEdits)]
    [InlineData("CCCCO", "CCCOC", RivalOrigin.OneEdit)]
    [InlineData("CCCC(=O)O", "CCOC(C)=O", RivalOrigin.OneEdit)]
    [InlineData("CCCC(=O)O", "CCC(=O)OC", RivalOrigin.OneEdit)]
    [InlineData("CCCC=O", "CCC(C)=O", RivalOrigin.OneEdit)]
    [InlineData("CCC(=O)CC", "CCCC(C)=O", RivalOrigin.OneEdit)]
    [InlineData("Cc1ccccc1C", "Cc1cccc(C)c1", RivalOrigin.OneEdit)]
    [InlineData("Cc1ccccc1C", "CCc1ccccc1", RivalOrigin.OneEdit)]
    [InlineData("COc1cc(C=O)ccc1O", "COc1ccc(C=O)cc1O", RivalOrigin.OneEdit)]
    [InlineData("CC(=O)Nc1ccc(O)cc1", "CC(=O)Oc1ccc(N)cc1", RivalOrigin.OneEdit)]
    [InlineData("CCOC(=O)c1ccccc1", "CCC(=O)Oc1ccccc1", RivalOrigin.OneEdit)]
    [InlineData("CCOC(=O)c1ccc(N)cc1", "CCOC(=O)c1cccc(N)c1", RivalOrigin.OneEdit)]
    [InlineData("C=CCC", "CC=CC", RivalOrigin.OneEdit)]
    [InlineData("COC(=O)/C=C\\C(=O)OC", "COC(=O)/C=C/C(=O)OC", RivalOrigin.Stereoisomer)]
    [InlineData("O=[N+]([O-])c1ccccc1Cl", "O=[N+]([O-])c1ccc(Cl)cc1", RivalOrigin.OneEdit)]
    public void A_known_mix_up_is_found_by_edits(string expected, string rival, RivalOrigin origin)
    {
        RivalCandidates found = Neighbours.Of(structures.Read(expected), EditsOnly);
        string wanted = StructureForm.Of(structures.Read(rival));
        output.WriteLine($"{found.Candidates.Length} rivals");
        Assert.Equal(origin, found.Candidates.FirstOrDefault(c => StructureForm.Of(c.Structure) == wanted)?.Origin);
    }

    [Theory]
    [InlineData("CCCOC(C)=O")]
    [InlineData("CC(=O)Nc1ccc(O)cc1")]
    [InlineData("C[C@@H](O)[C@H](O)C")]
    [InlineData("O=[N+]([O-])c1ccccc1Cl")]
    public void Rivals_are_isomers_each_once_nearest_first_and_always_the_same(string smiles)
    {
        Molecule expected = structures.Read(smiles);
        RivalCandidates found = Neighbours.Of(expected, new NeighbourOptions());
        string[] forms = [.. found.Candidates.Select(c => StructureForm.Of(c.Structure))];
        Assert.NotEmpty(forms);
        Assert.Equal(forms.Length, forms.Distinct().Count());
        Assert.DoesNotContain(StructureForm.Of(expected), forms);
        Assert.All(found.Candidates, c => Assert.Equal(MolecularFormula.Of(expected).ToString(), MolecularFormula.Of(c.Structure).ToString()));
        Assert.Equal(found.Candidates.Select(c => c.Origin).Order(), found.Candidates.Select(c => c.Origin));
        Assert.Equal(forms, Neighbours.Of(expected, new NeighbourOptions()).Candidates.Select(c => StructureForm.Of(c.Structure)));
        Assert.True(found.Candidates.Count(c => c.Origin is RivalOrigin.OneEdit or RivalOrigin.TwoEdits) <= 200);
    }

    [Fact]
    public void Cis_and_trans_on_a_ring_are_rivals_though_they_have_no_descriptors()
    {
        RivalCandidates found = Neighbours.Of(structures.Read("C[C@H]1CC[C@@H](C)CC1"), EditsOnly);
        Molecule partner = Assert.Single(found.Candidates, c => c.Origin == RivalOrigin.Stereoisomer).Structure;
        Molecule other = structures.Read("C[C@H]1CC[C@H](C)CC1");
        Assert.Equal(other.Atoms.Select(atom => atom.Winding), structures.Read(SmilesWriter.Write(partner)).Atoms.Select(atom => atom.Winding));
    }

    [Fact]
    public void The_complete_list_of_a_small_formula_holds_every_isomer_that_the_filters_keep()
    {
        Molecule expected = structures.Read("CCCOC(C)=O");
        RivalCandidates found = Neighbours.Of(expected, new NeighbourOptions());
        HashSet<string> kept =
        [
            .. IsomerGenerator.Isomers(IsomerFormula.Parse("C5H10O2")!).Select(graph => graph.ToMolecule())
                .Where(isomer => RivalFilters.Default.Objection(isomer) is null).Select(StructureForm.Of),
        ];
        Assert.True(found.IsComplete);
        output.WriteLine($"{kept.Count} of 400 kept");
        kept.Remove(StructureForm.Of(expected));
        Assert.Equal(kept.Order(), found.Candidates.Select(c => StructureForm.Of(c.Structure)).Order());
    }

    [Theory]
    [InlineData("Cc1c[nH]cn1", "Cc1cnc[nH]1")]
    [InlineData("C[C@H](O)C(=O)O", "C[C@@H](O)C(=O)O")]
    [InlineData("O=c1cccc[nH]1", "Oc1ccccn1")]
    public void Tautomers_by_heteroatoms_and_mirror_images_are_no_rivals(string expected, string same)
    {
        string form = StructureForm.Of(structures.Read(same));
        Assert.DoesNotContain(Neighbours.Of(structures.Read(expected), new NeighbourOptions()).Candidates, c => StructureForm.Of(c.Structure) == form);
    }

    [Fact]
    public void A_sulfone_stays_a_sulfone()
    {
        RivalCandidates found = Neighbours.Of(structures.Read("CS(=O)(=O)CCC"), EditsOnly);
        Assert.NotEmpty(found.Candidates);
        Assert.All(found.Candidates, c =>
        {
            Atom sulfur = c.Structure.Atoms.Single(a => a.AtomicNumber == 16);
            Assert.Equal(0, sulfur.HydrogenCount);
            Assert.Equal(2, c.Structure.BondsOf(sulfur.Index).Count(b => c.Structure.Bonds[b].Order == 2 && c.Structure.Atoms[c.Structure.Other(b, sulfur.Index)].AtomicNumber == 8));
        });
    }

    [Theory]
    [InlineData("Cc1ncc([N+](=O)[O-])n1CCO", "a nitro group stays a nitro group")]
    [InlineData("CN(C)C(=N)NC(=N)N.Cl", "a hydrochloride keeps its chloride")]
    public void Edits_invent_no_charges_and_exchange_no_atoms_between_the_parts_of_a_salt(string smiles, string why)
    {
        RivalCandidates found = Neighbours.Of(structures.Read(smiles), EditsOnly);
        Assert.True(found.Candidates.Length > 3, why);
        Assert.All(found.Candidates, c =>
        {
            Assert.All(c.Structure.Atoms.Where(a => a.FormalCharge == 1), a =>
                Assert.Equal([(1, 1), (1, 2)], c.Structure.BondsOf(a.Index)
                    .Where(b => c.Structure.Atoms[c.Structure.Other(b, a.Index)].AtomicNumber == 8)
                    .Select(b => (1, c.Structure.Bonds[b].Order)).Order()));
            Assert.All(c.Structure.Atoms.Where(a => a.AtomicNumber == 17), a => Assert.Empty(c.Structure.BondsOf(a.Index)));
        });
    }
}
