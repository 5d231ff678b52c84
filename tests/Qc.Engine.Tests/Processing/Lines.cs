namespace Qc.Engine.Tests.Processing;

/// <summary>Slow, obvious measures of single lines.</summary>
internal static class Lines
{
    /// <summary>Place of the highest point between two indices, refined by a parabola.</summary>
    public static double TopIndex(double[] values, int first, int last)
    {
        int top = first;
        for (int i = first; i <= last; i++)
        {
            top = values[i] > values[top] ? i : top;
        }

        double curvature = values[top - 1] - (2 * values[top]) + values[top + 1];
        return top + (0.5 * (values[top - 1] - values[top + 1]) / curvature);
    }
}
