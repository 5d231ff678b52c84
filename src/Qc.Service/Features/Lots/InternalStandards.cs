namespace Qc.Service.Features.Lots;

/// <summary>Internal standards known by name: those with BIPM reference data reports, and others in common use.</summary>
internal static class InternalStandards
{
    private static readonly Dictionary<string, string> SmilesOf = new(StringComparer.OrdinalIgnoreCase)
    {
        ["maleic acid"] = @"OC(=O)/C=C\C(=O)O",
        ["fumaric acid"] = "OC(=O)/C=C/C(=O)O",
        ["dimethyl sulfone"] = "CS(C)(=O)=O",
        ["dimethyl terephthalate"] = "COC(=O)c1ccc(cc1)C(=O)OC",
        ["1,4-bis(trimethylsilyl)benzene"] = "C[Si](C)(C)c1ccc(cc1)[Si](C)(C)C",
        ["3,5-bis(trifluoromethyl)benzoic acid"] = "OC(=O)c1cc(cc(c1)C(F)(F)F)C(F)(F)F",
        ["benzoic acid"] = "OC(=O)c1ccccc1",
        ["1,3,5-trimethoxybenzene"] = "COc1cc(OC)cc(OC)c1",
        ["1,2,4,5-tetrachloro-3-nitrobenzene"] = "O=[N+]([O-])c1c(Cl)c(Cl)cc(Cl)c1Cl",
        ["1,2,4,5-tetrachlorobenzene"] = "Clc1cc(Cl)c(Cl)cc1Cl",
        ["caffeine"] = "Cn1cnc2c1c(=O)n(C)c(=O)n2C",
        ["hexamethyldisiloxane"] = "C[Si](C)(C)O[Si](C)(C)C",
    };

    /// <summary>Known names.</summary>
    public static IEnumerable<string> Names => SmilesOf.Keys;

    /// <summary>SMILES of a known name, else null.</summary>
    public static string? Find(string name) => SmilesOf.GetValueOrDefault(name.Trim());
}
