using System.Collections.Immutable;
using Qc.Engine.Values;
using Qc.Engine.Verdicts;

namespace Qc.Engine.Quantities;

/// <summary>
/// Mass fraction by internal standard:
///   w_A = (I_A/I_S)·(N_S/N_A)·(M_A/M_S)·(m_S/m_A)·w_S
/// with I integral, N protons behind it, M molar mass, m mass, A analyte, S standard. All factors are independent, so the
/// relative variances add (GUM, JCGM 100:2008, 5.1.6). Source: BIPM Rapport 2018/05 (ISRD-02), equation 1; Malz and
/// Jancke, J. Pharm. Biomed. Anal. 2005, 38, 813.
/// </summary>
public sealed record InternalStandardAssay
{
    /// <summary>I_A/I_S.</summary>
    public required Uncertain IntegralRatio { get; init; }

    /// <summary>N_A.</summary>
    public required Uncertain AnalyteProtons { get; init; }

    /// <summary>N_S.</summary>
    public required Uncertain StandardProtons { get; init; }

    /// <summary>M_A in g/mol.</summary>
    public required Uncertain AnalyteMolarMassGramPerMol { get; init; }

    /// <summary>M_S in g/mol.</summary>
    public required Uncertain StandardMolarMassGramPerMol { get; init; }

    /// <summary>m_A in mg.</summary>
    public required Uncertain AnalyteMassMg { get; init; }

    /// <summary>m_S in mg.</summary>
    public required Uncertain StandardMassMg { get; init; }

    /// <summary>w_S as a mass fraction, 0 to 1.</summary>
    public required Uncertain StandardMassFraction { get; init; }

    /// <summary>The mass fraction of the analyte with its standard uncertainty.</summary>
    public Uncertain MassFraction
    {
        get
        {
            double w = IntegralRatio.Value
                * (StandardProtons.Value / AnalyteProtons.Value)
                * (AnalyteMolarMassGramPerMol.Value / StandardMolarMassGramPerMol.Value)
                * (StandardMassMg.Value / AnalyteMassMg.Value)
                * StandardMassFraction.Value;
            double relative = Math.Sqrt(Budget.Sum(line => line.RelativeStandardUncertainty * line.RelativeStandardUncertainty));
            return new Uncertain(w, w * relative);
        }
    }

    /// <summary>Contributions to the relative standard uncertainty, largest first.</summary>
    public ImmutableArray<BudgetLine> Budget =>
    [
        .. new[]
        {
            Line("integral ratio", IntegralRatio),
            Line("protons of the analyte", AnalyteProtons),
            Line("protons of the standard", StandardProtons),
            Line("molar mass of the analyte", AnalyteMolarMassGramPerMol),
            Line("molar mass of the standard", StandardMolarMassGramPerMol),
            Line("weighing of the analyte", AnalyteMassMg),
            Line("weighing of the standard", StandardMassMg),
            Line("purity of the standard", StandardMassFraction),
        }.OrderByDescending(line => line.RelativeStandardUncertainty),
    ];

    private static BudgetLine Line(string source, Uncertain x) => new(source, x.StandardUncertainty / x.Value);
}
