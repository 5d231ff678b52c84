using Qc.Engine.Structures;
using Xunit;

namespace Qc.Chemistry.Tests;

[Collection(ReaderCollection.Name)]
public sealed class ReadingTests(ReaderFixture fixture)
{
    [Fact]
    public void Atoms_come_in_the_order_of_the_canonical_form_however_the_structure_is_written()
    {
        ReadStructure one = fixture.Smiles("OCC");
        ReadStructure other = fixture.Smiles("C(O)C");

        Assert.Equal("CCO", one.Smiles);
        Assert.Equal(one.Smiles, other.Smiles);
        Assert.Equal([(6, 3), (6, 2), (8, 1)], one.Molecule.Atoms.Select(atom => (atom.AtomicNumber, atom.HydrogenCount)));
        Assert.Equal(one.Molecule.Atoms.AsEnumerable(), other.Molecule.Atoms);
    }

    [Fact]
    public void A_molfile_reads_back_as_the_structure_it_was_written_from()
    {
        ReadStructure first = fixture.Smiles("C[C@H](N)C(=O)O");
        StructureResult second = fixture.Reader.ReadMolfile(first.MolBlock);

        Assert.Null(second.Error);
        Assert.Equal(first.Smiles, second.Structure!.Smiles);
        Assert.Equal(first.InchiKey, second.Structure.InchiKey);
        Assert.Equal(first.Molecule.Atoms.AsEnumerable(), second.Structure.Molecule.Atoms);
        Assert.Equal(first.Molecule.Bonds.AsEnumerable(), second.Structure.Molecule.Bonds);
    }

    // InChIKeys of L-alanine and ethanol: from memory [R]; widely printed on labels and in safety data sheets.
    [Theory]
    [InlineData("C[C@H](N)C(=O)O", "QNAYBMKLOCPYGJ-REOHCLBHSA-N")]
    [InlineData("CCO", "LFQSCWFLJHTTHZ-UHFFFAOYSA-N")]
    public void InChIKeys_are_the_published_ones(string smiles, string key) => Assert.Equal(key, fixture.Smiles(smiles).InchiKey);

    [Fact]
    public void Handedness_and_double_bond_geometry_are_kept()
    {
        Molecule molecule = fixture.Smiles("C[C@H](O)/C=C/Cl").Molecule;

        Assert.Equal(Handedness.S, Assert.Single(molecule.Atoms, atom => atom.Handedness != Handedness.None).Handedness);
        Bond bond = Assert.Single(molecule.Bonds, b => b.Order == 2);
        Assert.Equal(DoubleBondGeometry.E, bond.Geometry);
        Assert.False(bond.SidesAreCis);
        Assert.NotNull(molecule.BondBetween(bond.A, bond.SideOfA));
        Assert.NotNull(molecule.BondBetween(bond.B, bond.SideOfB));
    }

    [Fact]
    public void Written_hydrogens_are_counted_on_their_atom_and_deuterium_stays_an_atom()
    {
        Assert.Equal(4, Assert.Single(fixture.Smiles("[H]C([H])([H])[H]").Molecule.Atoms).HydrogenCount);
        Molecule imine = fixture.Smiles("[H]/N=C(/C)CC").Molecule;
        Assert.Equal(5, imine.Atoms.Length);
        Assert.Equal(1, Assert.Single(imine.Atoms, atom => atom.AtomicNumber == 7).HydrogenCount);
        Molecule heavyChloroform = fixture.Smiles("[2H]C(Cl)(Cl)Cl").Molecule;
        Assert.Equal((1, 2), Assert.Single(heavyChloroform.Atoms.Select(a => (a.AtomicNumber, a.Isotope)), a => a.Isotope > 0));
        Assert.Equal(0, heavyChloroform.Atoms.Sum(atom => atom.HydrogenCount));
    }

    [Fact]
    public void Benzene_has_Kekule_orders_aromatic_marks_and_one_ring()
    {
        Molecule benzene = fixture.Smiles("c1ccccc1").Molecule;

        Assert.Equal(3, benzene.Bonds.Count(bond => bond.Order == 2));
        Assert.All(benzene.Bonds, bond => Assert.True(bond.IsAromatic));
        Assert.All(benzene.Atoms, atom => Assert.True(atom.IsAromatic));
        Assert.Equal(6, Assert.Single(benzene.Rings).Length);
    }

    [Fact]
    public void Salts_keep_their_components_and_charges()
    {
        Molecule salt = fixture.Smiles("CC(=O)[O-].[Na+]").Molecule;

        Assert.Equal(1, Assert.Single(salt.Atoms, atom => atom.AtomicNumber == 11).FormalCharge);
        Assert.Equal(0, salt.Atoms.Sum(atom => atom.FormalCharge));
    }

    [Theory]
    [InlineData("", "No structure", null)]
    [InlineData("   ", "No structure", null)]
    [InlineData("CC O", "does not belong", 3)]
    [InlineData("CC(", "not SMILES", 3)]
    [InlineData("C)C", "was not opened", 2)]
    [InlineData("C1CC", "not closed", null)]
    [InlineData("CC(C)(C)(C)C", "Atom 2 (C) has valence 5", null)]
    [InlineData("c1cccc1", "aromatic", null)]
    [InlineData("C*", "wildcard", null)]
    [InlineData("[CH3]", "radical", null)]
    [InlineData("CC~O", "search patterns", null)]
    [InlineData("C[Pu]", "atomic weight", null)]
    public void What_cannot_be_read_is_refused_in_one_sentence(string smiles, string says, int? position)
    {
        StructureResult result = fixture.Reader.ReadSmiles(smiles);

        Assert.Null(result.Structure);
        Assert.Contains(says, result.Error!.Message, StringComparison.Ordinal);
        Assert.Equal(position, result.Error.Position);
    }

    // SMILES "@@" seen from the atom before: the rest clockwise. Hydrogen first, then F, Cl, Br: clockwise from the hydrogen.
    // With the hydrogen second, seen from F: H, Cl, Br clockwise, which from H is F, Br, Cl clockwise.
    [Theory]
    [InlineData("[C@@H](F)(Cl)Br", true)]
    [InlineData("F[C@@H](Cl)Br", false)]
    [InlineData("F[C@@](Cl)(Br)I", true)]
    public void Winding_is_that_of_the_SMILES(string smiles, bool clockwiseByElement)
    {
        Molecule molecule = fixture.Smiles(smiles).Molecule;
        Atom centre = Assert.Single(molecule.Atoms, atom => atom.AtomicNumber == 6);

        // Brought from index order to order of atomic number: each swap reverses the sense.
        int[] elements = [.. molecule.NeighboursOf(centre.Index).Order().Select(i => molecule.Atoms[i].AtomicNumber)];
        int swaps = elements.SelectMany((first, i) => elements.Skip(i + 1).Where(later => later < first)).Count();
        Assert.Equal(clockwiseByElement, (centre.Winding == Winding.Clockwise) ^ (swaps % 2 == 1));
    }

    [Fact]
    public void A_ring_keeps_cis_and_trans_though_no_centre_has_a_descriptor_of_its_own()
    {
        Assert.NotEqual(fixture.Smiles("C[C@H]1CC[C@@H](C)CC1").Smiles, fixture.Smiles("C[C@H]1CC[C@H](C)CC1").Smiles);
        Assert.Equal(2, fixture.Smiles("C[C@H]1CC[C@@H](C)CC1").Molecule.Atoms.Count(atom => atom.Winding != Winding.None));
    }

    [Fact]
    public void Texts_beyond_the_limits_are_refused()
    {
        Assert.Contains("2000 characters", fixture.Reader.ReadSmiles(new string('C', 2001)).Error!.Message, StringComparison.Ordinal);
        Assert.Contains("200 heavy atoms", fixture.Reader.ReadSmiles(new string('C', 201)).Error!.Message, StringComparison.Ordinal);
        Assert.Contains("200000 characters", fixture.Reader.ReadMolfile(new string(' ', 10) + new string('x', 200_000)).Error!.Message, StringComparison.Ordinal);
        Assert.Null(fixture.Reader.ReadSmiles(new string('C', 200)).Error);
    }

    [Fact]
    public void A_molfile_with_an_atom_list_no_end_or_a_second_structure_is_refused()
    {
        const string list = "\n\n\n  1  0  1  0  0  0  0  0  0  0999 V2000\n    0.0000    0.0000    0.0000 L   0  0  0  0  0  0  0  0  0  0  0  0\nM  ALS   1  2 F C   N   \nM  END\n";
        Assert.NotNull(fixture.Reader.ReadMolfile(list).Error);
        Assert.Contains("M  END", fixture.Reader.ReadMolfile("CCO").Error!.Message, StringComparison.Ordinal);
        string good = fixture.Smiles("CCO").MolBlock;
        Assert.Contains("more than one", fixture.Reader.ReadMolfile(good + "$$$$\n" + good).Error!.Message, StringComparison.Ordinal);
    }
}
