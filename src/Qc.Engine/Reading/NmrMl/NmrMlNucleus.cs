namespace Qc.Engine.Reading.NmrMl;

/// <summary>nmrML names nuclei by chemical ontology ("hydrogen atom"), sometimes as isotopes ("13C").</summary>
internal static class NmrMlNucleus
{
    private static readonly (string Element, string Isotope)[] s_observed =
    [
        ("hydrogen", "1H"), ("carbon", "13C"), ("fluorine", "19F"), ("phosphorus", "31P"), ("nitrogen", "15N"),
    ];

    public static bool TryParse(string name, out string nucleus)
    {
        if (NucleusName.TryParse(name, out nucleus))
        {
            return true;
        }

        foreach (var (element, isotope) in s_observed)
        {
            if (name.StartsWith(element, StringComparison.OrdinalIgnoreCase))
            {
                nucleus = isotope;
                return true;
            }
        }

        return false;
    }
}
