namespace Qc.Engine.Fitting;

/// <summary>
/// The line shape shared by the sharp lines of a spectrum: a pseudo-Voigt of unit area.
/// Notation: w full width at half height, η Gaussian share, x distance from the line, all in Hz.
///   L(x) = (w/2π) / (x² + w²/4),  G(x) = (2/w)·√(ln 2/π)·exp(−4 ln 2·x²/w²),  V = (1−η)L + ηG.
/// Source: Wertheim et al., Rev. Sci. Instrum. 1974, 45, 1369 (from memory).
/// </summary>
/// <param name="WidthHertz">Full width at half height, above zero.</param>
/// <param name="GaussianShare">Gaussian share of the area, 0 to 1.</param>
public readonly record struct LineShape(double WidthHertz, double GaussianShare)
{
    private const double FourLn2 = 2.772588722239781;
    private const double GaussianPeak = 0.939437278699651;

    /// <summary>Height at a distance from the centre, per unit area, in 1/Hz.</summary>
    public double At(double distanceHertz)
    {
        double lorentzian = WidthHertz / (2 * Math.PI) / ((distanceHertz * distanceHertz) + (0.25 * WidthHertz * WidthHertz));
        if (GaussianShare == 0)
        {
            return lorentzian;
        }

        double u = distanceHertz / WidthHertz;
        double gaussian = GaussianPeak / WidthHertz * Math.Exp(-FourLn2 * u * u);
        return ((1 - GaussianShare) * lorentzian) + (GaussianShare * gaussian);
    }

    /// <summary>Height and its derivatives with respect to distance, width and Gaussian share.</summary>
    public (double Value, double ByDistance, double ByWidth, double ByShare) WithDerivatives(double distanceHertz)
    {
        double w = WidthHertz;
        double denominator = (distanceHertz * distanceHertz) + (0.25 * w * w);
        double lorentzian = w / (2 * Math.PI) / denominator;
        double lorentzianByDistance = -2 * distanceHertz * lorentzian / denominator;
        double lorentzianByWidth = (lorentzian / w) - (0.5 * w * lorentzian / denominator);
        double u = distanceHertz / w;
        double gaussian = GaussianPeak / w * Math.Exp(-FourLn2 * u * u);
        double gaussianByDistance = -2 * FourLn2 * u / w * gaussian;
        double gaussianByWidth = ((2 * FourLn2 * u * u) - 1) / w * gaussian;
        double share = GaussianShare;
        return (
            ((1 - share) * lorentzian) + (share * gaussian),
            ((1 - share) * lorentzianByDistance) + (share * gaussianByDistance),
            ((1 - share) * lorentzianByWidth) + (share * gaussianByWidth),
            gaussian - lorentzian);
    }
}
