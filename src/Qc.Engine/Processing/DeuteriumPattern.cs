namespace Qc.Engine.Processing;

/// <summary>How well a signal is a given multiplet.</summary>
/// <param name="CentreHertz">Its centre from 0 ppm.</param>
/// <param name="Explained">Share of the variance about a straight line that the multiplet explains, at most 1.</param>
/// <param name="AgainstRivals">Squares left over, as a share of what the best rival pattern leaves; below 1 the multiplet is better.</param>
/// <param name="Height">Height of the fitted multiplet at its centre, in units of intensity.</param>
internal readonly record struct PatternFit(double CentreHertz, double Explained, double AgainstRivals, double Height);

/// <summary>
/// Recognises the residual signal of a deuterated solvent: the 1:2:3:2:1 of CHD2 or the 1:1:1 of CHD with the known ²J(HD).
/// By least squares, y ≈ a·T(x; centre, width) + b + c·x, T the sum of Lorentzian lines, a, b, c linear, centre and width by
/// search. So it works where lines merge. Rivals: a single line, multiplets of two (7 Hz) or four (own coupling) protons, and the
/// same pattern with a coupling a third smaller or larger, each with its own best width and centre.
/// </summary>
internal static class DeuteriumPattern
{
    private const double CentreStepHertz = 0.1;
    private const double MarginHertz = 3;
    private const int FewestPoints = 12;

    private static readonly double[] WidthsHertz = [0.35, 0.5, 0.7, 1, 1.4, 2, 2.8, 4, 5.6];
    private static readonly double[] Quintet = [1, 2, 3, 2, 1];
    private static readonly double[] TripletByDeuterium = [1, 1, 1];
    private static readonly double[] TripletByProtons = [1, 2, 1];
    private static readonly double[] QuintetByProtons = [1, 4, 6, 4, 1];
    private static readonly double[] Single = [1];

    /// <summary>The best fit with its centre near a place; null where the window has too few points.</summary>
    /// <param name="spectrum">The spectrum.</param>
    /// <param name="placeHertz">Where to look, from 0 ppm.</param>
    /// <param name="quintet">1:2:3:2:1, else 1:1:1.</param>
    /// <param name="couplingHertz">²J(HD).</param>
    public static PatternFit? Fit(Spectrum spectrum, double placeHertz, bool quintet, double couplingHertz)
    {
        double[] pattern = quintet ? Quintet : TripletByDeuterium;
        double reach = (0.5 * (pattern.Length - 1) * couplingHertz) + MarginHertz;
        int first = (int)Math.Ceiling(spectrum.IndexOf((placeHertz + reach) / spectrum.FrequencyMHz));
        int last = (int)Math.Floor(spectrum.IndexOf((placeHertz - reach) / spectrum.FrequencyMHz));
        if (first < 0 || last >= spectrum.Count || last - first + 1 < FewestPoints)
        {
            return null;
        }

        var window = new Window(spectrum, first, last);
        double wander = 0.6 * couplingHertz;
        Trial own = Best(window, placeHertz, wander, pattern, couplingHertz);
        (double[] Pattern, double Coupling)[] rivals =
        [
            (Single, 0), (TripletByProtons, 7), (QuintetByProtons, couplingHertz), (pattern, couplingHertz * 2 / 3), (pattern, couplingHertz * 4 / 3),
        ];
        double rival = rivals.Min(r => Best(window, placeHertz, wander, r.Pattern, r.Coupling).Left);
        return window.Total <= 0 || own.Amplitude <= 0
            ? null
            : new PatternFit(own.CentreHertz, 1 - (own.Left / window.Total), rival > 0 ? own.Left / rival : 1, own.Amplitude * At(0, pattern, couplingHertz, own.WidthHertz));
    }

    private static Trial Best(Window window, double placeHertz, double wanderHertz, double[] pattern, double couplingHertz)
    {
        var best = new Trial(placeHertz, 1, 0, window.Total);
        int steps = (int)Math.Ceiling(wanderHertz / CentreStepHertz);
        var template = new double[window.Count];
        foreach (double width in WidthsHertz)
        {
            for (int step = -steps; step <= steps; step++)
            {
                double centre = placeHertz + (step * CentreStepHertz);
                for (int i = 0; i < template.Length; i++)
                {
                    template[i] = At(window.Hertz(i) - centre, pattern, couplingHertz, width);
                }

                (double amplitude, double left) = window.Project(template);
                if (amplitude > 0 && left < best.Left)
                {
                    best = new Trial(centre, width, amplitude, left);
                }
            }
        }

        return best;
    }

    private static double At(double hertz, double[] pattern, double couplingHertz, double widthHertz)
    {
        double sum = 0;
        for (int k = 0; k < pattern.Length; k++)
        {
            double u = 2 * (hertz - ((k - (0.5 * (pattern.Length - 1))) * couplingHertz)) / widthHertz;
            sum += pattern[k] / (1 + (u * u));
        }

        return sum;
    }

    private readonly record struct Trial(double CentreHertz, double WidthHertz, double Amplitude, double Left);

    /// <summary>A stretch of the spectrum with its straight line taken out.</summary>
    private sealed class Window
    {
        private readonly Spectrum spectrum;
        private readonly int first;
        private readonly double[] values;

        public Window(Spectrum spectrum, int first, int last)
        {
            this.spectrum = spectrum;
            this.first = first;
            values = spectrum.Intensity[first..(last + 1)];
            TakeLineOut(values);
            Total = Dot(values, values);
        }

        public int Count => values.Length;

        public double Total { get; }

        public double Hertz(int i) => spectrum.Ppm(first + i) * spectrum.FrequencyMHz;

        /// <summary>Amplitude of a template beside a straight line, and the squares left. Overwrites the template.</summary>
        public (double Amplitude, double Left) Project(double[] template)
        {
            TakeLineOut(template);
            double square = Dot(template, template);
            if (square <= 0)
            {
                return (0, Total);
            }

            double amplitude = Dot(template, values) / square;
            return (amplitude, Total - (amplitude * amplitude * square));
        }

        private static void TakeLineOut(double[] y)
        {
            double middle = 0.5 * (y.Length - 1);
            double mean = 0;
            double slope = 0;
            double square = 0;
            for (int i = 0; i < y.Length; i++)
            {
                mean += y[i];
                slope += y[i] * (i - middle);
                square += (i - middle) * (i - middle);
            }

            mean /= y.Length;
            slope /= square;
            for (int i = 0; i < y.Length; i++)
            {
                y[i] -= mean + (slope * (i - middle));
            }
        }

        private static double Dot(double[] a, double[] b)
        {
            double sum = 0;
            for (int i = 0; i < a.Length; i++)
            {
                sum += a[i] * b[i];
            }

            return sum;
        }
    }
}
