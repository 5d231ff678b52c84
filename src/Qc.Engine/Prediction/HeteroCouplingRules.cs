using System.Collections.Immutable;
using Qc.Engine.Prediction.Environments;
using Qc.Engine.Structures;

namespace Qc.Engine.Prediction;

/// <summary>Couplings of proton sets to 19F and 31P from Data/hetero-couplings.tsv.</summary>
internal static class HeteroCouplingRules
{
    private static readonly ImmutableDictionary<int, string> Nuclei = new Dictionary<int, string> { [9] = "19F", [15] = "31P" }.ToImmutableDictionary();
    private static readonly PatternTable Rules = PatternTable.Load("hetero-couplings");

    /// <summary>All couplings to other nuclei: of each set, atoms with the same row are equivalent.</summary>
    public static ImmutableArray<ExpectedHeteroCoupling> Of(PerceivedMolecule molecule, ProtonGroups protons)
    {
        var found = ImmutableArray.CreateBuilder<ExpectedHeteroCoupling>();
        var parameters = new Dictionary<(int, string, int), int>();
        foreach (ProtonSet set in protons.Sets.Where(set => protons.Groups[set.Group].Lability == Lability.Fixed))
        {
            var byRow = molecule.Molecule.Atoms
                .Where(atom => Nuclei.ContainsKey(atom.AtomicNumber))
                .Select(atom => (atom.Index, Row: RowBetween(molecule, set, atom)))
                .Where(pair => pair.Row is not null)
                .GroupBy(pair => pair.Row!.Id);
            foreach (var atoms in byRow)
            {
                Fact row = atoms.First().Row!;
                var constant = (set.Group, row.Id, atoms.Count());
                if (!parameters.TryGetValue(constant, out int parameter))
                {
                    parameter = parameters.Count;
                    parameters.Add(constant, parameter);
                }

                found.Add(new ExpectedHeteroCoupling(
                    set.Index, row.Place, [.. atoms.Select(pair => pair.Index)], row.Value, row.StandardUncertainty, parameter, row.Id));
            }
        }

        return found.ToImmutable();
    }

    private static Fact? RowBetween(PerceivedMolecule molecule, ProtonSet set, Atom nucleus) =>
        Rules.Rows.FirstOrDefault(row => row.Fact.Place == Nuclei[nucleus.AtomicNumber]
            && set.Atoms.Any(atom => row.Pattern.Matches(molecule, atom).Any(match => match[row.Pattern.End] == nucleus.Index)))?.Fact;
}
