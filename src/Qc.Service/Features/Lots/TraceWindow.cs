using System.Runtime.InteropServices;
using Qc.Records.Lots;

namespace Qc.Service.Features.Lots;

/// <summary>Curves for drawing, from high to low ppm. Decimated to the least and greatest value of each bin, so no peak is lost.</summary>
/// <param name="FirstPpm">Highest shift of the answer.</param>
/// <param name="LastPpm">Lowest.</param>
/// <param name="Decimated">Whether points were left out.</param>
/// <param name="Ppm">Shifts.</param>
/// <param name="Measured">The spectrum as judged.</param>
/// <param name="Modelled">The fitted model.</param>
/// <param name="LeftOver">Measured minus modelled.</param>
public sealed record TraceDto(
    double FirstPpm, double LastPpm, bool Decimated, float[] Ppm, float[] Measured, float[] Modelled, float[] LeftOver);

/// <summary>Cuts a window out of a stored trace.</summary>
internal static class TraceWindow
{
    /// <summary>The window between two shifts in at most about <paramref name="points"/> points.</summary>
    public static TraceDto Cut(Trace trace, double? from, double? to, int points)
    {
        ReadOnlySpan<float> measured = MemoryMarshal.Cast<byte, float>(trace.Measured);
        ReadOnlySpan<float> modelled = MemoryMarshal.Cast<byte, float>(trace.Modelled);
        double high = Math.Max(from ?? double.MinValue, to ?? double.MinValue);
        double low = Math.Min(from ?? double.MaxValue, to ?? double.MaxValue);
        int first = high == double.MinValue ? 0 : Index(trace, high);
        int last = low == double.MaxValue ? trace.Count - 1 : Index(trace, low);
        int count = Math.Max(1, last - first + 1);
        int bin = Math.Max(1, (int)Math.Ceiling(2.0 * count / points));
        var picked = new List<int>();
        for (int i = first; i <= last; i += bin)
        {
            Pick(measured, i, Math.Min(i + bin, last + 1), picked);
        }

        var dto = new TraceDto(
            Ppm(trace, first), Ppm(trace, last), bin > 1,
            new float[picked.Count], new float[picked.Count], new float[picked.Count], new float[picked.Count]);
        for (int k = 0; k < picked.Count; k++)
        {
            int i = picked[k];
            dto.Ppm[k] = (float)Ppm(trace, i);
            dto.Measured[k] = measured[i];
            dto.Modelled[k] = modelled[i];
            dto.LeftOver[k] = measured[i] - modelled[i];
        }

        return dto;
    }

    /// <summary>Four little-endian float columns one after the other: ppm, measured, modelled, left over.</summary>
    public static byte[] Bytes(TraceDto trace)
    {
        float[] all = [.. trace.Ppm, .. trace.Measured, .. trace.Modelled, .. trace.LeftOver];
        return MemoryMarshal.AsBytes(all.AsSpan()).ToArray();
    }

    private static void Pick(ReadOnlySpan<float> values, int from, int end, List<int> picked)
    {
        int least = from;
        int greatest = from;
        for (int i = from + 1; i < end; i++)
        {
            least = values[i] < values[least] ? i : least;
            greatest = values[i] > values[greatest] ? i : greatest;
        }

        picked.Add(Math.Min(least, greatest));
        if (least != greatest)
        {
            picked.Add(Math.Max(least, greatest));
        }
    }

    private static int Index(Trace trace, double ppm) =>
        double.IsNaN(ppm) ? 0 : (int)Math.Clamp(Math.Round((ppm - trace.FirstPpm) / trace.PpmPerPoint), 0, trace.Count - 1);

    private static double Ppm(Trace trace, int index) => trace.FirstPpm + (index * trace.PpmPerPoint);
}
