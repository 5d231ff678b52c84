using static System.FormattableString;

namespace Qc.Engine.Reading.JcampDx;

/// <summary>
/// Acquisition facts of a block. Labels of the standard come first; private ones ('$') are a fallback, each noted as a
/// departure because no standard says what they mean.
/// </summary>
internal sealed class JcampFacts(JcampHeader header)
{
    private const double LargestMHz = 3000;
    private const double LowestKelvinWithoutUnit = 200;
    private const double ZeroCelsius = 273.15;

    private readonly ReadingLog _log = header.Log;

    public bool TryRead(out AcquisitionFacts? facts)
    {
        facts = null;
        if (!TryNucleus(out var nucleus) || !TryFrequency(out var frequency))
        {
            return false;
        }

        facts = new AcquisitionFacts
        {
            Title = header.Text("TITLE").Split('\n')[0],
            Nucleus = nucleus,
            ObserveFrequencyMHz = frequency,
            ZeroPpmFrequencyMHz = ZeroPpmFrequency(frequency),
            SolventLabel = Solvent(),
            AcquisitionTimeSeconds = AcquisitionTime(),
            RelaxationDelaySeconds = RelaxationDelay(),
            Scans = Scans(),
            PulseAngleDegrees = Private("$PULSEANGLE", "pulse angle", a => a is > 0 and <= 360),
            TemperatureKelvin = Temperature(),
            Labels = header.Labels,
        };
        return true;
    }

    private bool TryNucleus(out string nucleus)
    {
        nucleus = "";
        var label = header.Has(".OBSERVENUCLEUS") ? ".OBSERVENUCLEUS" : "$NUC1";
        if (!header.Has(label) || !header.IsUnique(label))
        {
            return _log.Fail(".OBSERVENUCLEUS", 0, "##.OBSERVE NUCLEUS= ^1H or another isotope", "The nucleus is not stated");
        }

        if (!NucleusName.TryParse(header.Text(label), out nucleus))
        {
            return _log.Fail(label, header.LineOf(label), "an isotope such as ^1H", Unread(label));
        }

        NotePrivate(label, "nucleus");
        return true;
    }

    private bool TryFrequency(out double frequency)
    {
        var label = header.Has(".OBSERVEFREQUENCY") || !header.Has("$SFO1") ? ".OBSERVEFREQUENCY" : "$SFO1";
        if (!header.TryNumber(label, out frequency))
        {
            return false;
        }

        if (frequency is > LargestMHz * 1e3 and < LargestMHz * 1e6)
        {
            _log.Warn(label, header.LineOf(label), Invariant($"{frequency} can only be Hz, and is read as such instead of MHz"));
            frequency /= 1e6;
        }

        NotePrivate(label, "observe frequency");
        return frequency is >= 1 and <= LargestMHz
            || _log.Fail(label, header.LineOf(label), "a frequency in MHz, 1 to 3000", Invariant($"The frequency is {frequency}"));
    }

    private double? ZeroPpmFrequency(double observe)
    {
        const string label = "$SF";
        if (header.Fact(label) is not { } zero)
        {
            return null;
        }

        // 1000 ppm is wider than any window of the nuclei judged here.
        if (Math.Abs(zero - observe) > 1e-3 * observe)
        {
            _log.Warn(label, header.LineOf(label), Invariant($"{zero} MHz cannot be 0 ppm of {observe} MHz and was passed over"));
            return null;
        }

        NotePrivate(label, "frequency of 0 ppm");
        return zero;
    }

    private string? Solvent()
    {
        foreach (var label in (string[])[".SOLVENTNAME", ".SOLVENT", "$SOLVENT"])
        {
            var text = header.Text(label).Trim('<', '>', '"', '\'', ' ', '\n');
            if (text.Length > 0)
            {
                NotePrivate(label, "solvent");
                return text;
            }
        }

        return null;
    }

    private int? Scans()
    {
        var label = header.Has(".AVERAGES") ? ".AVERAGES" : "$NS";
        return header.Fact(label) is { } scans && scans is >= 1 and <= int.MaxValue && scans == Math.Floor(scans)
            ? Noted(label, "number of scans", (int)scans)
            : null;
    }

    private double? AcquisitionTime()
    {
        if (header.Fact(".ACQUISITIONTIME") is { } stated && stated is > 0 and < 3600)
        {
            return stated;
        }

        // Points count both parts, the width is that of complex sampling: time = points / (2 width).
        return header.Fact("$TD") is { } points && points > 1 && header.Fact("$SWH") is { } width && width > 0
            ? Noted("$TD", "acquisition time", points / (2 * width))
            : null;
    }

    private double? RelaxationDelay()
    {
        if (Private("$RELAXATIONDELAY", "relaxation delay", d => d is >= 0 and < 1e5) is { } stated)
        {
            return stated;
        }

        // An array of delays, "(0..63)" and then the values; element 1 is the one before each scan.
        var items = header.Text("$D").Split((char[])[' ', '\n', '\t'], StringSplitOptions.RemoveEmptyEntries);
        return items.Length > 2
            && items[0].StartsWith("(0..", StringComparison.Ordinal)
            && AffnNumber.TryParse(items[2], out var delay)
            && delay is >= 0 and < 1e5
                ? Noted("$D", "relaxation delay", delay)
                : null;
    }

    // The standard's TEMPERATURE is in degrees Celsius (McDonald and Wilks 1988); $TE is in kelvin.
    private double? Temperature()
    {
        if (header.Fact("TEMPERATURE") is not { } stated)
        {
            return Private("$TE", "temperature", t => t is > 50 and < 1000);
        }

        var unit = header.Keyword("TEMPERATURE");
        var isKelvin = unit.EndsWith('K') || unit.EndsWith("KELVIN", StringComparison.Ordinal);
        if (!isKelvin && stated >= LowestKelvinWithoutUnit)
        {
            _log.Warn("TEMPERATURE", header.LineOf("TEMPERATURE"), Invariant($"{stated} without a unit is taken as kelvin"));
            isKelvin = true;
        }

        var kelvin = isKelvin ? stated : stated + ZeroCelsius;
        return kelvin > 0 ? kelvin : null;
    }

    private double? Private(string label, string fact, Func<double, bool> isPlausible) =>
        header.Fact(label) is { } value && isPlausible(value) ? Noted(label, fact, value) : null;

    private T Noted<T>(string label, string fact, T value)
    {
        NotePrivate(label, fact);
        return value;
    }

    private void NotePrivate(string label, string fact)
    {
        if (label.StartsWith('$'))
        {
            _log.Warn(label, header.LineOf(label), $"The {fact} is taken from a private label, as no standard one states it");
        }
    }

    private string Unread(string label) => $"'{JcampHeader.Shown(header.Text(label))}' cannot be read";
}
