using System.Collections.Immutable;

namespace Qc.Engine.Fitting;

/// <summary>A line pattern whose spacing is known and only moves as a whole: residual solvent, water, an impurity's multiplet, an exchangeable proton.</summary>
/// <param name="Amplitude">Index of its amplitude.</param>
/// <param name="ShiftParameter">Parameter that holds its centre in Hz from 0 ppm.</param>
/// <param name="WidthParameter">Parameter that holds ln(width/Hz).</param>
/// <param name="Lines">Offset from the centre in Hz and intensity of each line.</param>
internal sealed record FixedPatternSource(
    int Amplitude, int ShiftParameter, int WidthParameter, ImmutableArray<(double OffsetHertz, double Intensity)> Lines) : ILineSource
{
    /// <inheritdoc/>
    public void Emit(double[] parameters, LineSheet sheet)
    {
        foreach ((double offset, double intensity) in Lines)
        {
            sheet.Add(Amplitude, parameters[ShiftParameter] + offset, intensity, WidthParameter);
            sheet.AddGradient(ShiftParameter, 1);
        }
    }

    /// <summary>First-order lines of protons with n equivalent neighbours each for several couplings; intensities sum to the count.</summary>
    /// <param name="count">Number of protons.</param>
    /// <param name="couplings">Number of equivalent spin-½ neighbours and their coupling in Hz.</param>
    public static ImmutableArray<(double OffsetHertz, double Intensity)> FirstOrder(
        double count, params ReadOnlySpan<(int Neighbours, double Hertz)> couplings)
    {
        var lines = new List<(double Offset, double Intensity)> { (0, count) };
        foreach ((int neighbours, double hertz) in couplings)
        {
            for (int n = 0; n < neighbours; n++)
            {
                lines = [.. lines.SelectMany(l => new[] { (l.Offset + (hertz / 2), l.Intensity / 2), (l.Offset - (hertz / 2), l.Intensity / 2) })];
                lines = [.. lines.GroupBy(l => Math.Round(l.Offset, 6)).Select(g => (g.Key, g.Sum(l => l.Intensity)))];
            }
        }

        return [.. lines.OrderByDescending(l => l.Offset)];
    }
}
