using static System.FormattableString;

namespace Qc.Engine.Reading.JcampDx;

/// <summary>Puts an FID on its time axis.</summary>
internal static class JcampFid
{
    private const double NarrowestHertz = 10;
    private const double WidestHertz = 1e7;

    public static bool TryBuild(JcampHeader header, AcquisitionFacts facts, JcampData data, out FidMeasurement? fid)
    {
        fid = null;
        var log = header.Log;
        if (data.Imaginary is null)
        {
            return log.Fail("NTUPLES", header.LineOf("NTUPLES"), "a real and an imaginary page", "The FID has no imaginary part");
        }

        if (header.Keyword(".ACQUISITIONMODE").StartsWith("SEQUENTIAL", StringComparison.Ordinal))
        {
            return log.Fail(
                ".ACQUISITIONMODE", header.LineOf(".ACQUISITIONMODE"), "SIMULTANEOUS", "Sequentially sampled FIDs are not read");
        }

        if (!TryDwell(header, data, out var dwell))
        {
            return false;
        }

        if (data.First != 0)
        {
            log.Warn("FIRST", header.LineOf("FIRST"), "The FID does not begin at time 0; the delay is not taken into account");
        }

        if (header.Keyword("$REVERSE") is "YES" or "TRUE")
        {
            log.Warn("$REVERSE", header.LineOf("$REVERSE"), "The header asks for a reversed spectrum; the FID is kept as written");
        }

        facts = facts with { AcquisitionTimeSeconds = dwell * data.Real.Length };
        var centre = CentrePpm(header, facts);
        var delay = GroupDelay(header, data.Real.Length);
        fid = new FidMeasurement(facts, log.Warnings, data.Real, data.Imaginary, dwell, centre, delay);
        return true;
    }

    private static bool TryDwell(JcampHeader header, JcampData data, out double dwell)
    {
        var log = header.Log;
        double? unit = data.Units switch
        {
            "SECONDS" or "SECOND" or "S" or "SEC" => 1,
            "MILLISECONDS" or "MS" or "MSEC" => 1e-3,
            "MICROSECONDS" or "US" or "USEC" => 1e-6,
            _ => null,
        };
        dwell = data.Step * (unit ?? 0);
        if (unit is null)
        {
            return log.Fail(
                "UNITS",
                header.LineOf("UNITS"),
                "SECONDS or MICROSECONDS",
                $"The unit '{JcampHeader.Shown(data.Units)}' is not read");
        }

        if (!(1 / dwell is >= NarrowestHertz and <= WidestHertz))
        {
            return log.Fail(
                "LAST",
                header.LineOf("LAST"),
                Invariant($"a spectral width of {NarrowestHertz} to {WidestHertz} Hz"),
                Invariant($"The time between points is {dwell} s"));
        }

        // A factor of two between them would put every line in the wrong place.
        return header.Fact("$SWH") is not { } width || Math.Abs((width * dwell) - 1) < 1e-3 || log.Fail(
            "$SWH",
            header.LineOf("$SWH"),
            Invariant($"a spectral width of {1 / dwell} Hz, as the time axis gives"),
            Invariant($"The spectral width is stated as {width} Hz"));
    }

    // .SHIFT REFERENCE names a point of a spectrum that the FID is not yet; in measured FIDs it is often left over from another
    // processing (0.4 to 8.5 ppm off in 4 of 11), so that only the frequency of 0 ppm counts.
    private static double? CentrePpm(JcampHeader header, AcquisitionFacts facts)
    {
        if (facts.ZeroPpmFrequencyMHz is { } zero)
        {
            return (facts.ObserveFrequencyMHz - zero) / zero * 1e6;
        }

        if (header.Has(".SHIFTREFERENCE"))
        {
            header.Log.Warn(
                ".SHIFTREFERENCE",
                header.LineOf(".SHIFTREFERENCE"),
                "A shift reference refers to a point of a spectrum and was passed over for the FID");
        }

        return null;
    }

    private static double? GroupDelay(JcampHeader header, int points)
    {
        const string label = "$GRPDLY";
        if (header.Fact(label) is not { } delay || delay <= 0 || delay >= points)
        {
            return null;
        }

        header.Log.Warn(label, header.LineOf(label), "The delay of the digital filter is taken from a private label");
        return delay;
    }
}
