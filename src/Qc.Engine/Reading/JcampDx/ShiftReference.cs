using static System.FormattableString;

namespace Qc.Engine.Reading.JcampDx;

/// <summary>
/// ##.SHIFT REFERENCE= INTERNAL or EXTERNAL, compound, point number (from 1, in file order), shift there in ppm.
/// Source: Lampen et al., Pure Appl. Chem. 1999, 71, 1549 (5.01).
/// </summary>
/// <param name="Index">Index of the point, from 0.</param>
/// <param name="Ppm">Its shift.</param>
internal readonly record struct ShiftReference(int Index, double Ppm)
{
    private const string Label = ".SHIFTREFERENCE";
    private const string Fields = "INTERNAL or EXTERNAL, compound, point number, ppm";

    /// <summary>The reference: null where the header has none, an error where it cannot be read.</summary>
    public static bool TryRead(JcampHeader header, int points, out ShiftReference? reference)
    {
        reference = null;
        if (!header.Has(Label))
        {
            return true;
        }

        var log = header.Log;
        var line = header.LineOf(Label);
        var items = header.Text(Label).Split('\n')[0].Trim('(', ')', ' ').Split(',', StringSplitOptions.TrimEntries);
        if (!header.IsUnique(Label))
        {
            return false;
        }

        if (items.Length < 4 || !AffnNumber.TryParse(items[^2], out var number) || !AffnNumber.TryParse(items[^1], out var ppm))
        {
            return log.Fail(Label, line, Fields, "The shift reference cannot be read");
        }

        if (number == 0)
        {
            log.Warn(Label, line, "The point number is 0; it is taken as the first point, which may be one point off");
            number = 1;
        }

        if (number != Math.Floor(number) || number < 1 || number > points)
        {
            return log.Fail(
                Label, line, Invariant($"a point number from 1 to {points}"), Invariant($"The point number is {number}"));
        }

        reference = new ShiftReference((int)number - 1, ppm);
        return true;
    }
}
