using System.Runtime.InteropServices;
using System.Runtime.Intrinsics;

namespace Qc.Engine.Spins;

/// <summary>
/// Inner loops with a fixed width of four and no fused multiply-add, so that every machine rounds in the same order.
/// </summary>
internal static class VectorMath
{
    /// <summary>Σ a_i b_i.</summary>
    public static double Dot(ReadOnlySpan<double> a, ReadOnlySpan<double> b)
    {
        ReadOnlySpan<Vector256<double>> va = Wide(a);
        ReadOnlySpan<Vector256<double>> vb = Wide(b[..a.Length]);
        Vector256<double> sum = Vector256<double>.Zero;
        Vector256<double> sum2 = Vector256<double>.Zero;
        int i = 0;
        for (; i + 1 < va.Length && i + 1 < vb.Length; i += 2)
        {
            sum += va[i] * vb[i];
            sum2 += va[i + 1] * vb[i + 1];
        }

        for (; i < va.Length; i++)
        {
            sum += va[i] * vb[i];
        }

        double total = Vector256.Sum(sum + sum2);
        for (int k = va.Length * 4; k < a.Length; k++)
        {
            total += a[k] * b[k];
        }

        return total;
    }

    /// <summary>The products of one vector with four others, read once: Σ a_i b_i, Σ a_i c_i, Σ a_i d_i, Σ a_i e_i.</summary>
    public static (double B, double C, double D, double E) Dot4(
        ReadOnlySpan<double> a, ReadOnlySpan<double> b, ReadOnlySpan<double> c, ReadOnlySpan<double> d, ReadOnlySpan<double> e)
    {
        ReadOnlySpan<Vector256<double>> va = Wide(a);
        ReadOnlySpan<Vector256<double>> vb = Wide(b[..a.Length]);
        ReadOnlySpan<Vector256<double>> vc = Wide(c[..a.Length]);
        ReadOnlySpan<Vector256<double>> vd = Wide(d[..a.Length]);
        ReadOnlySpan<Vector256<double>> ve = Wide(e[..a.Length]);
        Vector256<double> sb = Vector256<double>.Zero, sc = sb, sd = sb, se = sb;
        for (int i = 0; i < va.Length && i < vb.Length && i < vc.Length && i < vd.Length && i < ve.Length; i++)
        {
            Vector256<double> x = va[i];
            sb += x * vb[i];
            sc += x * vc[i];
            sd += x * vd[i];
            se += x * ve[i];
        }

        (double B, double C, double D, double E) sum =
            (Vector256.Sum(sb), Vector256.Sum(sc), Vector256.Sum(sd), Vector256.Sum(se));
        for (int k = va.Length * 4; k < a.Length; k++)
        {
            sum = (sum.B + a[k] * b[k], sum.C + a[k] * c[k], sum.D + a[k] * d[k], sum.E + a[k] * e[k]);
        }

        return sum;
    }

    /// <summary>y += s x.</summary>
    public static void AddScaled(Span<double> y, double s, ReadOnlySpan<double> x)
    {
        Span<Vector256<double>> vy = Wide(y);
        ReadOnlySpan<Vector256<double>> vx = Wide(x[..y.Length]);
        Vector256<double> vs = Vector256.Create(s);
        for (int i = 0; i < vy.Length && i < vx.Length; i++)
        {
            vy[i] += vs * vx[i];
        }

        for (int k = vy.Length * 4; k < y.Length; k++)
        {
            y[k] += s * x[k];
        }
    }

    /// <summary>a −= s x + t y, then p += q a; returns Σ a_i v_i. One pass over a row of a matrix that is being reduced.</summary>
    public static double UpdateAndApply(
        Span<double> a, double s, ReadOnlySpan<double> x, double t, ReadOnlySpan<double> y,
        Span<double> p, double q, ReadOnlySpan<double> v)
    {
        Span<Vector256<double>> va = Wide(a);
        ReadOnlySpan<Vector256<double>> vx = Wide(x[..a.Length]);
        ReadOnlySpan<Vector256<double>> vy = Wide(y[..a.Length]);
        Span<Vector256<double>> vp = Wide(p[..a.Length]);
        ReadOnlySpan<Vector256<double>> vv = Wide(v[..a.Length]);
        Vector256<double> vs = Vector256.Create(s), vt = Vector256.Create(t), vq = Vector256.Create(q);
        Vector256<double> sum = Vector256<double>.Zero;
        for (int i = 0; i < va.Length && i < vx.Length && i < vy.Length && i < vp.Length && i < vv.Length; i++)
        {
            Vector256<double> updated = va[i] - (vs * vx[i] + vt * vy[i]);
            va[i] = updated;
            vp[i] += vq * updated;
            sum += updated * vv[i];
        }

        double total = Vector256.Sum(sum);
        for (int k = va.Length * 4; k < a.Length; k++)
        {
            a[k] -= s * x[k] + t * y[k];
            p[k] += q * a[k];
            total += a[k] * v[k];
        }

        return total;
    }

    /// <summary>Rotates two vectors: (a, b) becomes (c a − s b, s a + c b).</summary>
    public static void Rotate(Span<double> a, Span<double> b, double c, double s)
    {
        Span<Vector256<double>> va = Wide(a);
        Span<Vector256<double>> vb = Wide(b[..a.Length]);
        Vector256<double> vc = Vector256.Create(c), vs = Vector256.Create(s);
        for (int i = 0; i < va.Length && i < vb.Length; i++)
        {
            Vector256<double> x = va[i];
            va[i] = vc * x - vs * vb[i];
            vb[i] = vs * x + vc * vb[i];
        }

        for (int k = va.Length * 4; k < a.Length; k++)
        {
            double x = a[k];
            a[k] = c * x - s * b[k];
            b[k] = s * x + c * b[k];
        }
    }

    private static Span<Vector256<double>> Wide(Span<double> x) => MemoryMarshal.Cast<double, Vector256<double>>(x);

    private static ReadOnlySpan<Vector256<double>> Wide(ReadOnlySpan<double> x) =>
        MemoryMarshal.Cast<double, Vector256<double>>(x);
}
