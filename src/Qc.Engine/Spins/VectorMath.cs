using System.Runtime.InteropServices;
using System.Runtime.Intrinsics;

namespace Qc.Engine.Spins;

/// <summary>Inner loops with a fixed width of four, so that every machine adds in the same order.</summary>
internal static class VectorMath
{
    /// <summary>Σ a_i b_i of two vectors of one length.</summary>
    public static double Dot(ReadOnlySpan<double> a, ReadOnlySpan<double> b)
    {
        ReadOnlySpan<Vector256<double>> va = MemoryMarshal.Cast<double, Vector256<double>>(a);
        ReadOnlySpan<Vector256<double>> vb = MemoryMarshal.Cast<double, Vector256<double>>(b[..a.Length]);
        Vector256<double> sum = Vector256<double>.Zero;
        for (int i = 0; i < va.Length; i++)
        {
            sum += va[i] * vb[i];
        }

        double total = Vector256.Sum(sum);
        for (int i = va.Length * 4; i < a.Length; i++)
        {
            total += a[i] * b[i];
        }

        return total;
    }
}
