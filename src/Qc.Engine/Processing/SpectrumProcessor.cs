using System.Collections.Immutable;
using System.Numerics;
using Qc.Engine.Data;
using Qc.Engine.Reading;

namespace Qc.Engine.Processing;

/// <summary>
/// Makes a measurement ready to be judged. A processed spectrum is taken as it is but for a clearly rolling baseline; an FID
/// is transformed, phased and baseline-corrected. Both get their noise and their reference. Every step is recorded with its
/// parameters; the same measurement gives the same spectrum to the bit.
/// </summary>
public static class SpectrumProcessor
{
    /// <summary>A baseline is corrected where it departs from zero by this many noise deviations.</summary>
    private const double BaselineInNoise = 1.5;
    private const double SignalGapHertz = 22;
    private const double DerivedDelayReachRadians = 6 * Math.PI;
    private const double StatedDelayReachRadians = Math.PI;
    private const double DerivedDelayPriorRadians = 4 * Math.PI;
    private const double StatedDelayPriorRadians = Math.PI;

    /// <summary>Processes a measurement.</summary>
    public static ProcessingOutcome Process(Measurement measurement, ProcessingOptions options)
    {
        ArgumentNullException.ThrowIfNull(measurement);
        ArgumentNullException.ThrowIfNull(options);
        var steps = ImmutableArray.CreateBuilder<ProcessingStep>();
        double? delay = null;
        bool derived = false;
        double[] intensity;
        double firstPpm;
        double ppmPerPoint;
        if (measurement is FidMeasurement fid)
        {
            ComplexSpectrum transformed = FidTransform.Transform(fid);
            (delay, derived) = (transformed.GroupDelayPoints, transformed.DelayDerived);
            steps.Add(TransformStep(fid, transformed));
            (double zero, double first) = AutoPhase.Find(
                transformed.Points,
                fid.DwellSeconds,
                derived ? DerivedDelayReachRadians : StatedDelayReachRadians,
                derived ? DerivedDelayPriorRadians : StatedDelayPriorRadians,
                Math.Max(1, transformed.Points.Length / fid.Real.Length));
            steps.Add(Step("phase", "Phased so that the signals agree on being absorption; dispersion is odd about each line.", ("zeroDegrees", Degrees(zero)), ("firstDegrees", first * 180 / Math.PI)));
            intensity = [.. AutoPhase.Apply(transformed.Points, zero, first).Select(c => c.Real)];
            (firstPpm, ppmPerPoint) = (transformed.FirstPpm, transformed.PpmPerPoint);
        }
        else
        {
            var spectrum = (SpectrumMeasurement)measurement;
            intensity = spectrum.Real;
            (firstPpm, ppmPerPoint) = (spectrum.FirstPpm, spectrum.PpmPerPoint);
        }

        (double noise, double correlation) = NoiseEstimate.Of(intensity);
        intensity = CorrectBaseline(intensity, noise, steps);
        var processed = new Spectrum
        {
            Nucleus = measurement.Facts.Nucleus,
            FrequencyMHz = measurement.Facts.ZeroPpmFrequencyMHz ?? measurement.Facts.ObserveFrequencyMHz,
            Intensity = intensity,
            FirstPpm = firstPpm,
            PpmPerPoint = ppmPerPoint,
            NoiseStandardDeviation = Math.Max(noise, SmallestNoise(intensity)),
            NoiseCorrelationPoints = correlation,
        };
        string? header = SubstanceTable.Normalise(measurement.Facts.SolventLabel);
        AxisReference reference = Referencing.Find(processed, MeasuredSignals.Find(processed, SignalGapHertz), options.PrescribedSolvent, header);
        double correction = reference.CorrectionPpm ?? 0;
        steps.Add(Step(
            "reference",
            reference.CorrectionPpm is null
                ? "No TMS and no residual solvent was recognised; the file's axis is taken."
                : $"Referenced by {reference.By}.",
            ("correctionPpm", correction)));
        return new ProcessingOutcome
        {
            Spectrum = processed with
            {
                FirstPpm = firstPpm + correction,
                AxisCorrectionPpm = reference.CorrectionPpm,
                ReferencedBy = reference.By,
                RecognisedSolvent = reference.Solvent,
                Steps = steps.ToImmutable(),
            },
            HeaderSolvent = header,
            SolventContradiction = reference.Solvent is not null
                && ((header is not null && header != reference.Solvent)
                    || (options.PrescribedSolvent is not null && options.PrescribedSolvent != reference.Solvent)),
            RelaxationDelaySeconds = measurement.Facts.RelaxationDelaySeconds,
            AcquisitionTimeSeconds = measurement.Facts.AcquisitionTimeSeconds,
            GroupDelayPoints = delay,
            GroupDelayDerived = derived,
        };
    }

    private static double[] CorrectBaseline(double[] intensity, double noise, ImmutableArray<ProcessingStep>.Builder steps)
    {
        double[] baseline = Baseline.Of(intensity, noise);
        double largest = baseline.Max(Math.Abs);
        if (largest <= BaselineInNoise * noise)
        {
            return intensity;
        }

        steps.Add(Step(
            "baseline",
            "A smooth baseline through the signal-free stretches was taken off, by penalised least squares.",
            ("largestInNoise", noise > 0 ? largest / noise : 0)));
        var corrected = new double[intensity.Length];
        for (int i = 0; i < corrected.Length; i++)
        {
            corrected[i] = intensity[i] - baseline[i];
        }

        return corrected;
    }

    private static ProcessingStep TransformStep(FidMeasurement fid, ComplexSpectrum transformed)
    {
        string delay = transformed.DelayDerived ? "derived from the data, the header being silent" : "as the header states";
        string centre = fid.CentrePpm is null ? " The header does not tell the shift at the transmitter; 4.7 ppm is taken until the axis is referenced." : "";
        string broadening = transformed.BroadeningHertz > 0 ? " The FID was cut short and was damped towards its end." : "";
        return Step(
            "transform",
            $"Fourier transform with zero filling; delay of the digital filter {delay}.{broadening}{centre}",
            ("points", transformed.Points.Length),
            ("groupDelayPoints", transformed.GroupDelayPoints),
            ("broadeningHertz", transformed.BroadeningHertz));
    }

    /// <summary>A noiseless (calculated) spectrum still needs a scale for its tolerances: a millionth of its highest point.</summary>
    private static double SmallestNoise(double[] intensity) => Math.Max(1e-6 * intensity.Max(Math.Abs), 1e-300);

    private static double Degrees(double radians) => Math.IEEERemainder(radians * 180 / Math.PI, 360);

    private static ProcessingStep Step(string name, string note, params ReadOnlySpan<(string Name, double Value)> parameters)
    {
        var values = ImmutableSortedDictionary.CreateBuilder<string, double>(StringComparer.Ordinal);
        foreach ((string parameter, double value) in parameters)
        {
            values[parameter] = value;
        }

        return new ProcessingStep(name, values.ToImmutable(), note);
    }
}
