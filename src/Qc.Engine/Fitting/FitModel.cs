namespace Qc.Engine.Fitting;

/// <summary>A non-linear parameter of the fit, with what was known of it beforehand.</summary>
/// <param name="Name">For people and for tests, e.g. "shift H-4", "J 3".</param>
/// <param name="Start">Starting value.</param>
/// <param name="PriorMean">Expected value.</param>
/// <param name="PriorStandardUncertainty">Its standard uncertainty.</param>
/// <param name="Low">Lowest value allowed.</param>
/// <param name="High">Highest value allowed.</param>
/// <param name="LargestStep">Largest change in one iteration.</param>
internal sealed record FitParameter(
    string Name, double Start, double PriorMean, double PriorStandardUncertainty, double Low, double High, double LargestStep);

/// <summary>A linear amplitude of the fit (area in intensity × Hz per unit of intensity of its lines).</summary>
/// <param name="Name">For people and for tests.</param>
/// <param name="TiedTo">Amplitudes with the same tie are expected to be equal, -1 for none.</param>
/// <param name="TieShare">Relative standard uncertainty of that expectation.</param>
internal sealed record FitAmplitude(string Name, int TiedTo, double TieShare);

/// <summary>Lines of all components at one set of parameters, with the derivatives of their positions.</summary>
internal sealed class LineSheet
{
    public List<int> Amplitude { get; } = [];

    public List<double> Hertz { get; } = [];

    public List<double> Intensity { get; } = [];

    /// <summary>Index of the parameter that holds ln(width) of the line.</summary>
    public List<int> WidthParameter { get; } = [];

    public List<int> GradientStart { get; } = [];

    public List<int> GradientParameter { get; } = [];

    public List<double> GradientHertz { get; } = [];

    public int Count => Hertz.Count;

    public int GradientEnd(int line) => line + 1 < Count ? GradientStart[line + 1] : GradientParameter.Count;

    /// <summary>Begins a line; its gradient entries follow by <see cref="AddGradient"/>.</summary>
    public void Add(int amplitude, double hertz, double intensity, int widthParameter)
    {
        Amplitude.Add(amplitude);
        Hertz.Add(hertz);
        Intensity.Add(intensity);
        WidthParameter.Add(widthParameter);
        GradientStart.Add(GradientParameter.Count);
    }

    public void AddGradient(int parameter, double hertzPerUnit)
    {
        GradientParameter.Add(parameter);
        GradientHertz.Add(hertzPerUnit);
    }
}

/// <summary>Something that draws lines: the product, a solvent, an impurity, an exchangeable proton.</summary>
internal interface ILineSource
{
    /// <summary>Adds the source's lines at these parameter values.</summary>
    void Emit(double[] parameters, LineSheet sheet);
}

/// <summary>Parameters, amplitudes and line sources of a fit.</summary>
internal sealed class FitModel
{
    public List<FitParameter> Parameters { get; } = [];

    public List<FitAmplitude> Amplitudes { get; } = [];

    public List<ILineSource> Sources { get; } = [];

    /// <summary>Index of the Gaussian share, shared by all lines.</summary>
    public int ShareParameter { get; private set; }

    /// <summary>Index of ln(width/Hz) shared by all sharp lines.</summary>
    public int WidthParameter { get; private set; }

    public static FitModel WithLineShape(double widthHertz, double gaussianShare)
    {
        var model = new FitModel();
        double ln = Math.Log(widthHertz);
        model.WidthParameter = model.Add(new FitParameter("ln width", ln, ln, 0.3, ln - 0.8, ln + 0.8, 0.2));
        model.ShareParameter = model.Add(new FitParameter("Gaussian share", gaussianShare, 0.2, 0.3, 0, 0.9, 0.15));
        return model;
    }

    public int Add(FitParameter parameter)
    {
        Parameters.Add(parameter);
        return Parameters.Count - 1;
    }

    public int Add(FitAmplitude amplitude)
    {
        Amplitudes.Add(amplitude);
        return Amplitudes.Count - 1;
    }

    public LineSheet Lines(double[] parameters)
    {
        var sheet = new LineSheet();
        foreach (ILineSource source in Sources)
        {
            source.Emit(parameters, sheet);
        }

        return sheet;
    }
}
