using System.Collections.Immutable;
using Qc.Engine.Prediction.Environments;

namespace Qc.Engine.Prediction;

/// <summary>A substituent that acts on the protons of a saturated carbon, and from where.</summary>
/// <param name="Place">alpha, beta or gamma.</param>
/// <param name="Substituent">What it is.</param>
/// <param name="Root">Its attached atom.</param>
/// <param name="IsAcrossHeteroatom">
/// Whether the path leads through an ether oxygen or the like, which the schemes do not count as a step (worked example of BM97).
/// </param>
internal sealed record Influence(string Place, Substituent Substituent, int Root, bool IsAcrossHeteroatom)
{
    /// <summary>On the carbon itself.</summary>
    public const string Alpha = "alpha";

    /// <summary>One carbon further.</summary>
    public const string Beta = "beta";

    /// <summary>Two carbons further.</summary>
    public const string Gamma = "gamma";

    /// <summary>All substituents that act on a carbon, nearest first; the walk goes over alkyl carbon, and over ether-like atoms, which count as no step.</summary>
    public static ImmutableArray<Influence> On(PerceivedMolecule molecule, int carbon)
    {
        var found = ImmutableArray.CreateBuilder<Influence>();
        var seen = new HashSet<int> { carbon };
        List<(int Carbon, bool Across)> shell = [(carbon, false)];
        foreach (string place in (string[])[Alpha, Beta, Gamma])
        {
            List<(int Carbon, bool Across)> next = [];
            foreach ((int from, bool across) in shell)
            {
                foreach (int root in molecule.Neighbours(from).Where(seen.Add))
                {
                    Substituent substituent = molecule.SubstituentAt(from, root);
                    found.Add(new Influence(place, substituent, root, across));
                    if (substituent.Is("alkyl"))
                    {
                        next.Add((root, across));
                    }
                    else if (place != Gamma && molecule[root].AtomicNumber is 7 or 8 or 16 && molecule.Hybridisation(root) == 3)
                    {
                        next.AddRange(molecule.Neighbours(root).Where(atom => molecule.IsSaturatedCarbon(atom) && seen.Add(atom)).Select(atom => (atom, true)));
                    }
                }
            }

            shell = next;
        }

        return found.ToImmutable();
    }
}
