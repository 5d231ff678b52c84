using static System.FormattableString;

namespace Qc.Engine.Reading.JcampDx;

/// <summary>Puts a spectrum on a ppm axis that descends.</summary>
internal static class JcampSpectrum
{
    public static bool TryBuild(
        JcampHeader header, AcquisitionFacts facts, JcampData data, out SpectrumMeasurement? spectrum)
    {
        spectrum = null;
        if (!TryAxis(header, facts, data, out var axis))
        {
            return false;
        }

        var (firstPpm, step, isReferenced) = axis;
        if (step > 0)
        {
            firstPpm += step * (data.Real.Length - 1);
            step = -step;
            Array.Reverse(data.Real);
            if (data.Imaginary is not null)
            {
                Array.Reverse(data.Imaginary);
            }
        }

        spectrum = new SpectrumMeasurement(
            facts, header.Log.Warnings, data.Real, data.Imaginary, firstPpm, step, isReferenced);
        return true;
    }

    private static bool TryAxis(
        JcampHeader header, AcquisitionFacts facts, JcampData data, out (double First, double Step, bool IsReferenced) axis)
    {
        axis = default;
        var log = header.Log;
        var points = data.Real.Length;
        if (!ShiftReference.TryRead(header, points, out var reference))
        {
            return false;
        }

        switch (data.Units)
        {
            case "PPM" or "PARTSPERMILLION":
                axis = (data.First, data.Step, header.Keyword("$AXISREFERENCED") != "NO");
                NoteOtherReference(reference, axis, log);
                break;
            case "HZ" or "HERTZ":
                axis = FromHertz(header, facts, data, reference);
                break;
            default:
                return log.Fail("XUNITS", header.LineOf("XUNITS"), "HZ or PPM", $"The unit '{JcampHeader.Shown(data.Units)}' is not read");
        }

        return PpmWindow.Check(
            axis.First, axis.Step, points, facts.Nucleus, "XUNITS", header.LineOf("XUNITS"), log);
    }

    private static (double First, double Step, bool IsReferenced) FromHertz(
        JcampHeader header, AcquisitionFacts facts, JcampData data, ShiftReference? reference)
    {
        var log = header.Log;
        if (facts.ZeroPpmFrequencyMHz is null)
        {
            log.Warn(
                "XUNITS",
                header.LineOf("XUNITS"),
                "Hz are turned into ppm with the observe frequency; that of 0 ppm is not stated");
        }

        var step = data.Step / (facts.ZeroPpmFrequencyMHz ?? facts.ObserveFrequencyMHz);
        if (reference is { } point)
        {
            return (point.Ppm - (step * point.Index), step, true);
        }

        foreach (var label in (string[])["OFFSET", ".OFFSET", "$OFFSET"])
        {
            if (header.Fact(label) is { } highest)
            {
                log.Warn(
                    label,
                    header.LineOf(label),
                    "Taken as the shift of the point of highest frequency, as there is no shift reference");
                return (step < 0 ? highest : highest - (step * (data.Real.Length - 1)), step, true);
            }
        }

        log.Warn(".SHIFTREFERENCE", 0, "There is no shift reference; ppm are Hz divided by the frequency in MHz");
        return (data.First / (facts.ZeroPpmFrequencyMHz ?? facts.ObserveFrequencyMHz), step, false);
    }

    private static void NoteOtherReference(
        ShiftReference? reference, (double First, double Step, bool IsReferenced) axis, ReadingLog log)
    {
        if (reference is { } point && Math.Abs(axis.First + (axis.Step * point.Index) - point.Ppm) > Math.Abs(axis.Step))
        {
            log.Warn(".SHIFTREFERENCE", 0, Invariant($"The reference of {point.Ppm} ppm disagrees with the ppm axis, which is used"));
        }
    }
}
