namespace Qc.Chemistry;

/// <summary>What can be said against a text before the toolkit sees it.</summary>
internal static class InputCheck
{
    private const string EndLine = "M  END";

    // The characters of the OpenSMILES grammar; blanks would start a name or an extension.
    private const string SmilesSigns = "[]()=#$:/\\.-+@%*~<>";

    /// <summary>Why a SMILES is refused unseen, or null.</summary>
    public static StructureError? Smiles(string smiles, StructureLimits limits)
    {
        if (smiles.Length == 0)
        {
            return new StructureError("No structure was given.", null);
        }

        if (smiles.Length > limits.SmilesCharacters)
        {
            return new StructureError($"The SMILES is longer than {limits.SmilesCharacters} characters.", null);
        }

        for (int i = 0; i < smiles.Length; i++)
        {
            if (!char.IsAsciiLetterOrDigit(smiles[i]) && !SmilesSigns.Contains(smiles[i], StringComparison.Ordinal))
            {
                return new StructureError("This character does not belong in a SMILES.", i + 1);
            }
        }

        return null;
    }

    /// <summary>Why a molfile is refused unseen, or null.</summary>
    public static StructureError? Molfile(string molfile, StructureLimits limits)
    {
        if (string.IsNullOrWhiteSpace(molfile))
        {
            return new StructureError("No structure was given.", null);
        }

        if (molfile.Length > limits.MolfileCharacters)
        {
            return new StructureError($"The molfile is longer than {limits.MolfileCharacters} characters.", null);
        }

        string[] lines = molfile.Split('\n');
        int end = Array.FindIndex(lines, IsEnd);
        if (end < 0)
        {
            return new StructureError($"The molfile has no \"{EndLine}\" line.", null);
        }

        int second = Array.FindIndex(lines, end + 1, IsEnd);
        return second >= 0
            ? new StructureError("The file holds more than one structure.", second + 1)
            : null;
    }

    private static bool IsEnd(string line) => line.StartsWith(EndLine, StringComparison.Ordinal);
}
