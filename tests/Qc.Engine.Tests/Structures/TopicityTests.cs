using Qc.Engine.Structures;
using Xunit;

namespace Qc.Engine.Tests.Structures;

/// <summary>
/// Hard cases, each with its reason, worked out by hand from the substitution test of topicity
/// (K. Mislow, M. Raban, Top. Stereochem. 1 (1967) 1, from memory).
/// </summary>
public sealed class TopicityTests(StructureFixture fixture) : IClassFixture<StructureFixture>
{
    // Groups as name:count, "x" for exchangeable.
    [Theory]
    [InlineData("isobutyl: CH3 homotopic through free turning, CH2 enantiotopic", "CC(C)CCl", "1:6 2:1 4:2")]
    [InlineData("sec-butyl: CH2 beside an undrawn stereocentre", "CCC(C)Cl", "1:3 2a:1 2b:1 3:1 4:3")]
    [InlineData("ethyl lactate: OCH2 diastereotopic at a distance", "CCOC(=O)[C@H](C)O", "1:3 2a:1 2b:1 6:1 7:3 8:1x")]
    [InlineData("valine: CH3 of isopropyl beside a stereocentre", "CC(C)[C@H](N)C(=O)O", "1:3 2:1 3:3 4:1 5:2x 8:1x")]
    [InlineData("menthol: everything apart", "CC(C)[C@@H]1CC[C@@H](C)C[C@H]1O", "1:3 2:1 3:3 4:1 5a:1 5b:1 6a:1 6b:1 7:1 8:3 9a:1 9b:1 10:1 11:1x")]
    [InlineData("glycerol: CH2 diastereotopic through prochirality, the two CH2 enantiotopic", "OCC(O)CO", "1:2x 2a:2 2b:2 3:1 4:1x")]
    [InlineData("citric acid: like glycerol", "OC(=O)CC(O)(CC(=O)O)C(=O)O", "3:2x 4a:2 4b:2 6:1x 13:1x")]
    [InlineData("diethyl acetal: OCH2 diastereotopic, ethyls enantiotopic", "CC(OCC)OCC", "1:6 2a:2 2b:2 4:1 5:3")]
    [InlineData("formaldehyde diethyl acetal: a second mirror makes OCH2 enantiotopic", "CCOCOCC", "1:6 2:4 4:2")]
    [InlineData("meso-2,4-pentanediol: CH2 diastereotopic", "C[C@H](O)C[C@@H](C)O", "1:6 2:2 3:2x 4a:1 4b:1")]
    [InlineData("(R,R)-2,4-pentanediol: CH2 homotopic", "C[C@@H](O)C[C@@H](C)O", "1:6 2:2 3:2x 4:2")]
    [InlineData("2,4-pentanediol undrawn: apart, since one of its isomers has them apart", "CC(O)CC(C)O", "1:6 2:2 3:2x 4a:1 4b:1")]
    [InlineData("xylitol: meso, so the ends are enantiotopic", "OC[C@H](O)[C@@H](O)[C@H](O)CO", "1:2x 2a:2 2b:2 3:2 4:2x 5:1 6:1x")]
    [InlineData("cis-1,4-dimethylcyclohexane: each CH2 has a face", "C[C@H]1CC[C@@H](C)CC1", "1:6 2:2 3a:4 3b:4")]
    [InlineData("trans-1,4-dimethylcyclohexane: likewise", "C[C@H]1CC[C@H](C)CC1", "1:6 2:2 3a:4 3b:4")]
    [InlineData("cyclohexane: ring flip averages all", "C1CCCCC1", "1:12")]
    [InlineData("cyclohexanol: faces told apart by OH", "OC1CCCCC1", "1:1x 2:1 3a:2 3b:2 4a:2 4b:2 5a:1 5b:1")]
    [InlineData("N-methylpiperidine: nitrogen inverts, no faces", "CN1CCCCC1", "1:3 3:4 4:4 5:2")]
    [InlineData("N,N-dimethylacetamide: restricted C-N turning", "CC(=O)N(C)C", "1:3 5:3 6:3")]
    [InlineData("N-nitrosodimethylamine: restricted N-N turning", "CN(C)N=O", "1:3 3:3")]
    [InlineData("dimethylaniline: free turning", "CN(C)c1ccccc1", "1:6 5:2 6:2 7:1")]
    [InlineData("acetamide: NH2 apart, exchangeable", "CC(N)=O", "1:3 3a:1x 3b:1x")]
    [InlineData("1-bromo-1-chloroethene: geminal protons apart", "C=C(Cl)Br", "1a:1 1b:1")]
    [InlineData("1,1-dichloroethene: other end symmetric", "C=C(Cl)Cl", "1:2")]
    [InlineData("isobutene: other end symmetric", "CC(C)=C", "1:2 3:6")]
    [InlineData("acetone oxime: methyls cis and trans to OH", "CC(C)=NO", "1:3 3:3 5:1x")]
    [InlineData("1,2-butadiene: =CH2 lies astride the mirror plane", "CC=C=C", "1:2 3:1 4:3")]
    [InlineData("1-chloro-3-phenylallene with ethyl on the far carbon: an allene is a chiral axis", "CCC(c1ccccc1)=C=CCl", "1:3 2a:1 2b:1 5:1 8:2 9:2 10:1")]
    [InlineData("biphenyl", "c1ccccc1-c1ccccc1", "1:2 2:4 3:4")]
    [InlineData("4-bromoanisole: para-substituted benzene", "COc1ccc(Br)cc1", "1:3 4:2 5:2")]
    [InlineData("mesitylene", "Cc1cc(C)cc(C)c1", "1:9 3:3")]
    [InlineData("caffeine: all apart", "Cn1cnc2c1c(=O)n(C)c(=O)n2C", "1:3 8:1 10:3 12:3")]
    [InlineData("imidazole: the NH hydrogen moves", "c1c[nH]cn1", "1:2 3:1x 4:1")]
    [InlineData("benzyl methyl sulfoxide: sulfur is a stereocentre", "CS(=O)Cc1ccccc1", "1:3 4a:1 4b:1 6:2 7:2 8:1")]
    [InlineData("benzyl methyl sulfone: it is not", "CS(=O)(=O)Cc1ccccc1", "1:3 5:2 7:2 8:2 9:1")]
    [InlineData("diethyl methylphosphonate: OCH2 diastereotopic at prochiral phosphorus", "CCOP(C)(=O)OCC", "1:6 2a:2 2b:2 5:3")]
    [InlineData("triethyl phosphate: local threefold symmetry leaves OCH2 enantiotopic", "CCOP(=O)(OCC)OCC", "1:9 2:6")]
    [InlineData("solketal: gem-dimethyl faces", "CC1(C)OCC(CO)O1", "1:3 3:3 5a:1 5b:1 6:1 7a:1 7b:1 8:1x")]
    [InlineData("norbornane: exo and endo, undrawn bridgeheads forced", "C1CC2CCC1C2", "1a:4 1b:4 3:2 7:2")]
    [InlineData("adamantane: two kinds", "C1C2CC3CC1CC(C2)C3", "1:12 2:4")]
    [InlineData("ethanol-1-d: deuterium is not counted", "[2H]C(O)C", "2:1 3:3 4:1x")]
    [InlineData("propane-2,2-d2: CD2 tells nothing apart", "CC([2H])([2H])C", "4:6")]
    [InlineData("DL-alanine drawn as both: enantiomers have one spectrum", "C[C@H](N)C(=O)O.C[C@@H](N)C(=O)O", "1:6 2:2 3:4x 6:2x")]
    [InlineData("a chiral counter-ion makes nothing diastereotopic", "CC[NH2+]C.C[C@H](O)C(=O)[O-]", "1:3 2:2 3:2x 4:3 5:3 6:1 7:1x")]
    public void Groups_are_as_reasoned(string reason, string smiles, string expected)
    {
        ProtonGroups found = Topicity.Groups(fixture.Read(smiles));

        string actual = string.Join(' ', found.Groups.Select(group =>
            $"{group.Name[2..]}:{group.Count}{(group.Lability == Lability.Exchangeable ? "x" : "")}"));
        Assert.True(expected == actual, $"{reason}\nexpected {expected}\nactual   {actual}");
    }

    // Sets of each group by count.
    [Theory]
    [InlineData("ethyl: methyl and open CH2 are one set each", "CCBr", "3 | 2")]
    [InlineData("isopropyl: six protons couple alike", "CC(C)Br", "6 | 1")]
    [InlineData("diethyl ether: the two ethyls are apart", "CCOCC", "3 3 | 2 2")]
    [InlineData("p-disubstituted benzene: AA'XX'", "COc1ccc(Br)cc1", "3 | 1 1 | 1 1")]
    [InlineData("1,3-dichlorobenzene: H4 and H6 couple alike to H2 and H5", "Clc1cccc(Cl)c1", "2 | 1 | 1")]
    [InlineData("1,2-dichlorobenzene: AA'XX'", "Clc1ccccc1Cl", "1 1 | 1 1")]
    [InlineData("benzene: couplings within the only group cannot be seen", "c1ccccc1", "6")]
    [InlineData("tetrahydrofuran: ring CH2 couple by face", "C1CCOC1", "1 1 1 1 | 1 1 1 1")]
    [InlineData("tert-butyl", "CC(C)(C)C=O", "9 | 1")]
    [InlineData("isobutene: each =CH2 proton is cis to one methyl", "CC(C)=C", "1 1 | 3 3")]
    public void Sets_are_as_reasoned(string reason, string smiles, string expected)
    {
        ProtonGroups found = Topicity.Groups(fixture.Read(smiles));

        string actual = string.Join(" | ", found.Groups.Select(group =>
            string.Join(' ', found.Sets.Where(set => set.Group == group.Index).Select(set => set.Count))));
        Assert.True(expected == actual, $"{reason}\nexpected {expected}\nactual   {actual}");
    }

    [Fact]
    public void Partners_point_at_each_other_and_share_their_atoms()
    {
        ProtonGroups found = Topicity.Groups(fixture.Read("OCC(O)CO"));
        ProtonGroup a = found.Groups.Single(group => group.Name == "H-2a");
        ProtonGroup b = found.Groups.Single(group => group.Name == "H-2b");

        Assert.Equal(b.Index, a.DiastereotopicPartner);
        Assert.Equal(a.Index, b.DiastereotopicPartner);
        Assert.Equal(a.Atoms.AsEnumerable(), b.Atoms);
        Assert.All(found.Groups.Where(group => group != a && group != b), group => Assert.Equal(-1, group.DiastereotopicPartner));
    }

    [Fact]
    public void A_large_peptide_keeps_every_proton()
    {
        // Cyclosporin A, C62H111N11O12 (formula from memory).
        Molecule molecule = fixture.Read(
            "CC[C@H]1C(=O)N(CC(=O)N([C@H](C(=O)N[C@H](C(=O)N([C@H](C(=O)N[C@H](C(=O)N[C@@H](C(=O)N([C@H](C(=O)N([C@H](C(=O)N([C@H]("
            + "C(=O)N([C@H](C(=O)N1)[C@@H]([C@H](C)C/C=C/C)O)C)C(C)C)C)CC(C)C)C)CC(C)C)C)C)C)CC(C)C)C)C(C)C)CC(C)C)C)C");
        ProtonGroups found = Topicity.Groups(molecule);

        Assert.Equal(111, found.Groups.Sum(group => group.Count));
        Assert.Equal(111, found.Sets.Sum(set => set.Count));
        Assert.All(found.Groups, group => Assert.True(group.Count <= 3));
    }
}
