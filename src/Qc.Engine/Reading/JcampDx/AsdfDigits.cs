namespace Qc.Engine.Reading.JcampDx;

/// <summary>What a byte starts in a table of ordinates.</summary>
internal enum AsdfKind : byte
{
    Other,
    Number,
    Absolute,
    Difference,
    Repeat,
    Delimiter,
    Break,
}

/// <summary>The pseudo-digits. Source: McDonald and Wilks, Appl. Spectrosc. 1988, 42, 151, table VII.</summary>
internal static class AsdfDigits
{
    /// <summary>Absolute, by digit.</summary>
    public const string Squeezed = "@ABCDEFGHI";

    /// <summary>Absolute and negative; a blank where there is none.</summary>
    public const string SqueezedNegative = " abcdefghi";

    /// <summary>Difference.</summary>
    public const string Difference = "%JKLMNOPQR";

    /// <summary>Negative difference; a blank where there is none.</summary>
    public const string DifferenceNegative = " jklmnopqr";

    /// <summary>Repeat count; a blank where there is none.</summary>
    public const string Repeat = " STUVWXYZs";

    private static readonly AsdfKind[] s_kinds = new AsdfKind[256];
    private static readonly byte[] s_digits = new byte[256];
    private static readonly bool[] s_negative = new bool[256];

    static AsdfDigits()
    {
        Fill("0123456789+-.", AsdfKind.Number, false);
        Fill(Squeezed, AsdfKind.Absolute, false);
        Fill(SqueezedNegative, AsdfKind.Absolute, true);
        Fill(Difference, AsdfKind.Difference, false);
        Fill(DifferenceNegative, AsdfKind.Difference, true);
        Fill(Repeat, AsdfKind.Repeat, false);
        Fill(" \t,;\u001A", AsdfKind.Delimiter, false);
        Fill("\r\n", AsdfKind.Break, false);
    }

    public static AsdfKind KindOf(byte c) => s_kinds[c];

    public static int DigitOf(byte c) => s_digits[c];

    public static bool IsNegative(byte c) => s_negative[c];

    private static void Fill(string bytes, AsdfKind kind, bool negative)
    {
        for (var digit = 0; digit < bytes.Length; digit++)
        {
            s_kinds[bytes[digit]] = kind;
            s_digits[bytes[digit]] = (byte)digit;
            s_negative[bytes[digit]] = negative;
        }
    }
}
