using static System.FormattableString;

namespace Qc.Engine.Reading.NmrMl;

/// <summary>nmrML 1.0: the FID of acquisition1D and the processed spectra of spectrumList.</summary>
internal sealed class NmrMlReader
{
    private readonly NmrMlDocument _document;
    private readonly ReadingLog _log;

    private NmrMlReader(NmrMlDocument document, ReadingLog log)
    {
        _document = document;
        _log = log;
    }

    public static ReadingResult Read(ReadOnlyMemory<byte> content, ReadingLog log) =>
        NmrMlDocument.TryRead(content, log, out var document)
        && new NmrMlReader(document, log).TryBuild(out var measurements)
            ? ReadingResult.Read([.. measurements.Select(m => m with { Warnings = log.Warnings })])
            : ReadingResult.Rejected(log.Error!);

    private bool TryBuild(out List<Measurement> measurements)
    {
        measurements = [];
        if (_document.Arrays.Count == 0)
        {
            return _log.Fail(
                "fidData",
                0,
                "fidData or spectrumDataArray of one dimension",
                _document.HasMoreDimensions ? "Only one-dimensional measurements are read" : "The file holds no data");
        }

        if (!TryFacts(out var facts))
        {
            return false;
        }

        var left = _log.Limits.MaxPoints;
        foreach (var array in _document.Arrays)
        {
            if (!NmrMlNumbers.TryUnfold(array, _log, out var real, out var imaginary)
                || !CheckCount(array, real.Length, imaginary is not null))
            {
                return false;
            }

            left -= real.Length * (imaginary is null ? 1 : 2);
            if (left < 0)
            {
                return _log.Fail(array.Element, array.Line, Invariant($"at most {_log.Limits.MaxPoints}"), "The file has too many values");
            }

            if (!(array.Element == "fidData"
                ? TryFid(array, facts!, real, imaginary, out var measurement)
                : TrySpectrum(array, facts!, real, imaginary, out measurement)))
            {
                return false;
            }

            measurements.Add(measurement!);
        }

        return true;
    }

    private bool TryFacts(out AcquisitionFacts? facts)
    {
        facts = null;
        if (Number("irradiationFrequency") is not { } frequency || frequency is < 1 or > 3000)
        {
            return _log.Fail(
                "irradiationFrequency",
                LineOf("irradiationFrequency"),
                "a frequency in MHz, 1 to 3000",
                "The transmitter frequency cannot be read");
        }

        if (!NmrMlNucleus.TryParse(Text("acquisitionNucleus"), out var nucleus))
        {
            return _log.Fail(
                "acquisitionNucleus",
                LineOf("acquisitionNucleus"),
                "a nucleus such as 'hydrogen atom'",
                "The nucleus cannot be read");
        }

        var scans = Number("numberOfScans");
        var solvent = Text("solvent").Length > 0 ? Text("solvent") : Text("fieldFrequencyLock");
        facts = new AcquisitionFacts
        {
            Nucleus = nucleus,
            ObserveFrequencyMHz = frequency,
            SolventLabel = solvent.Length > 0 ? solvent : null,
            Scans = scans is >= 1 and <= int.MaxValue ? (int)scans : null,
            RelaxationDelaySeconds = Number("relaxationDelay", "second") is { } delay && delay >= 0 ? delay : null,
            TemperatureKelvin = Number("sampleAcquisitionTemperature", "kelvin") is { } kelvin && kelvin > 0 ? kelvin : null,
        };
        return true;
    }

    // numberOfDataPoints counts complex points or both parts, as the writer liked.
    private bool CheckCount(NmrMlArray array, int points, bool isComplex)
    {
        if (!AffnNumber.TryParse(array.StatedPoints, out var stated))
        {
            _log.Warn(array.Element, array.Line, "The number of points is not stated");
            return true;
        }

        return stated == points || (isComplex && stated == 2 * points) || _log.Fail(
            array.Element, array.Line, Invariant($"{stated} points, as stated"), Invariant($"The array holds {points} points"));
    }

    private bool TryFid(
        NmrMlArray array, AcquisitionFacts facts, double[] real, double[]? imaginary, out Measurement? measurement)
    {
        measurement = null;
        if (imaginary is null)
        {
            return _log.Fail(array.Element, array.Line, "complex128 or complex64", "The FID has no imaginary part");
        }

        if (Number("sweepWidth", "hertz") is not { } width || width is < 10 or > 1e7)
        {
            return _log.Fail(
                "sweepWidth",
                LineOf("sweepWidth"),
                "a spectral width of 10 to 10000000 hertz",
                "The spectral width cannot be read");
        }

        double? centre = null;
        if (Number("effectiveExcitationField") is { } nominal && Math.Abs(nominal - facts.ObserveFrequencyMHz) < 1e-3 * nominal)
        {
            centre = (facts.ObserveFrequencyMHz - nominal) / nominal * 1e6;
            _log.Warn(
                "effectiveExcitationField",
                LineOf("effectiveExcitationField"),
                "The nominal field is taken as 0 ppm of the FID, which is a few tenths of a ppm uncertain");
        }

        var delay = Number("groupDelay") is { } stated && stated > 0 && stated < real.Length ? stated : (double?)null;
        facts = facts with { AcquisitionTimeSeconds = real.Length / width };
        measurement = new FidMeasurement(facts, [], real, imaginary, 1 / width, centre, delay);
        return true;
    }

    private bool TrySpectrum(
        NmrMlArray array, AcquisitionFacts facts, double[] real, double[]? imaginary, out Measurement? measurement)
    {
        measurement = null;
        if (!array.Axis.Unit.Equals("parts per million", StringComparison.OrdinalIgnoreCase)
            && !array.Axis.Unit.Equals("ppm", StringComparison.OrdinalIgnoreCase))
        {
            return _log.Fail("xAxis", array.Line, "an axis in parts per million", "The unit of the axis is not read");
        }

        if (!AffnNumber.TryParse(array.Axis.Start, out var first)
            || !AffnNumber.TryParse(array.Axis.End, out var last)
            || first == last
            || real.Length < 2)
        {
            return _log.Fail("xAxis", array.Line, "startValue and endValue, different", "The axis cannot be read");
        }

        var step = (last - first) / Intervals(array, facts, first, last, real.Length);
        if (!PpmWindow.Check(first, step, real.Length, facts.Nucleus, "xAxis", array.Line, _log))
        {
            return false;
        }

        if (step > 0)
        {
            first += step * (real.Length - 1);
            step = -step;
            Array.Reverse(real);
            Array.Reverse(imaginary ?? []);
        }

        measurement = new SpectrumMeasurement(facts, [], real, imaginary, first, step, true);
        return true;
    }

    // Some writers give as end the edge of the window, one step beyond the last point; the spectral width tells.
    private double Intervals(NmrMlArray array, AcquisitionFacts facts, double first, double last, int points)
    {
        var frequency = Number("effectiveExcitationField") ?? facts.ObserveFrequencyMHz;
        if (Number("sweepWidth", "hertz") is { } width
            && Math.Abs((Math.Abs(last - first) * frequency / width) - 1) < 0.3 / points)
        {
            _log.Warn("xAxis", array.Line, "The axis spans the whole spectral width, so that its end is one step beyond the last point");
            return points;
        }

        return points - 1;
    }

    private string Text(string name) => _document.Parameters.TryGetValue(name, out var entry) ? entry.Value : "";

    private int LineOf(string name) => _document.Parameters.TryGetValue(name, out var entry) ? entry.Line : 0;

    private double? Number(string name, string? unit = null)
    {
        if (!_document.Parameters.TryGetValue(name, out var entry) || entry.Value.Length == 0)
        {
            return null;
        }

        if (unit is not null && !entry.Unit.StartsWith(unit, StringComparison.OrdinalIgnoreCase))
        {
            _log.Warn(name, entry.Line, $"The unit is not {unit}; the value was passed over");
            return null;
        }

        return AffnNumber.TryParse(entry.Value, out var value) ? value : null;
    }
}
