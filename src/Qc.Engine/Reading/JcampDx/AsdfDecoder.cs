// Ordinates of equidistant tables, forms AFFN, PAC, SQZ, DIF and DUP in any mixture, undeclared.
//
//   digit        0 1 2 3 4 5 6 7 8 9
//   SQZ, plus    @ A B C D E F G H I     absolute value; the pseudo-digit is delimiter, sign and leading digit in one
//   SQZ, minus     a b c d e f g h i
//   DIF, plus    % J K L M N O P Q R     difference from the ordinate before
//   DIF, minus     j k l m n o p q r
//   DUP            S T U V W X Y Z s     the token before stands so many times in all, itself included; in DIF the difference
//
// Each line is X, then ordinates; X belongs to the first. Where a line ends in DIF, the next line repeats its last ordinate as
// a check: equal, or the data are wrong. An 'E' after an integer is an exponent only as E+dd or E-dd, else SQZ 5.
// Source: McDonald and Wilks, Appl. Spectrosc. 1988, 42, 151, table VII; what E means in a mixture is our reading.
using static System.FormattableString;

namespace Qc.Engine.Reading.JcampDx;

/// <summary>Where a line of a table starts: its printed X and the index of its first ordinate.</summary>
internal readonly record struct LineMark(double X, int Index, int Line);

/// <summary>Decodes one table in a single pass over its bytes.</summary>
internal ref struct AsdfDecoder
{
    private const double LargestExact = 9007199254740992;
    private const int MostDigits = 15;

    private readonly ReadOnlySpan<byte> _text;
    private readonly string _label;
    private readonly int _maxPoints;
    private readonly ReadingLog _log;
    private readonly List<LineMark> _marks = [];
    private double[] _values;
    private int _count;
    private int _position;
    private int _line;
    private double _current;
    private double _difference;
    private Form _last;

    private AsdfDecoder(ReadOnlySpan<byte> text, string label, int line, int expected, int maxPoints, ReadingLog log)
    {
        _text = text;
        _label = label;
        _line = line;
        _maxPoints = maxPoints;
        _log = log;
        _values = new double[Math.Clamp(expected, 16, Math.Max(16, Math.Min(maxPoints, text.Length)))];
    }

    private enum Form : byte
    {
        None,
        Absolute,
        Difference,
    }

    /// <summary>Decodes a table.</summary>
    /// <param name="text">The lines after the label's own.</param>
    /// <param name="label">Label for errors.</param>
    /// <param name="line">Line of the file that <paramref name="text"/> starts with.</param>
    /// <param name="expected">Number of ordinates the header declares; a size hint only.</param>
    /// <param name="maxPoints">Most ordinates allowed.</param>
    /// <param name="log">Takes the error.</param>
    /// <param name="values">The ordinates as written, before any factor.</param>
    /// <param name="marks">Printed X of each line.</param>
    public static bool TryDecode(
        ReadOnlySpan<byte> text,
        string label,
        int line,
        int expected,
        int maxPoints,
        ReadingLog log,
        out double[] values,
        out List<LineMark> marks)
    {
        var decoder = new AsdfDecoder(text, label, line, expected, maxPoints, log);
        var done = decoder.Run();
        values = decoder._values.Length == decoder._count ? decoder._values : decoder._values[..decoder._count];
        marks = decoder._marks;
        return done;
    }

    private bool Run()
    {
        while (_position < _text.Length)
        {
            SkipDelimiters();
            if (!AtEndOfLine() && !DecodeLine())
            {
                return false;
            }

            _position = TextLines.AfterBreak(_text, TextLines.EndOfLine(_text, _position));
            _line++;
        }

        return true;
    }

    private bool DecodeLine()
    {
        if (!AffnNumber.TryRead(_text, ref _position, ExponentRule.Sign, out var x))
        {
            return Fail("a line that begins with its abscissa", "The line does not begin with a number");
        }

        var repeats = _last == Form.Difference;
        _marks.Add(new LineMark(x, repeats ? _count - 1 : _count, _line));
        _last = Form.None;
        while (_position < _text.Length)
        {
            var c = _text[_position];
            var done = AsdfDigits.KindOf(c) switch
            {
                AsdfKind.Difference => AddDifference(c),
                AsdfKind.Absolute => TakeSqueezed(c, ref repeats),
                AsdfKind.Number => TakeNumber(ref repeats),
                AsdfKind.Repeat => AddRepeats(c),
                AsdfKind.Delimiter => TrySkipDelimiters(),
                AsdfKind.Break => false,
                _ => AtEndOfLine() ? false : Fail("digits of the forms AFFN, PAC, SQZ, DIF, DUP", Unreadable(c)),
            };
            if (!done)
            {
                break;
            }
        }

        return _log.Error is null;
    }

    private bool TakeSqueezed(byte c, ref bool repeats) =>
        TryReadDigits(AsdfDigits.DigitOf(c), out var value) && TakeAbsolute(AsdfDigits.IsNegative(c) ? -value : value, ref repeats);

    private bool TakeNumber(ref bool repeats) =>
        AffnNumber.TryRead(_text, ref _position, ExponentRule.SignOrPoint, out var value)
            ? TakeAbsolute(value, ref repeats)
            : Fail("a finite number with a decimal point", "An ordinate cannot be read");

    private bool TakeAbsolute(double value, ref bool repeats)
    {
        _last = Form.Absolute;
        if (!repeats)
        {
            return Add(value);
        }

        repeats = false;
        return value == _current || Fail(
            Invariant($"{_current}, the last ordinate of the line before"),
            Invariant($"The check ordinate is {value}, so that the table is damaged"));
    }

    private bool AddDifference(byte c)
    {
        if (_last == Form.None)
        {
            return Fail("an absolute first ordinate", "The line begins with a difference");
        }

        if (!TryReadDigits(AsdfDigits.DigitOf(c), out var value))
        {
            return false;
        }

        _difference = AsdfDigits.IsNegative(c) ? -value : value;
        _last = Form.Difference;
        return AddStep(_difference);
    }

    private bool AddRepeats(byte c)
    {
        if (_last == Form.None)
        {
            return Fail("an ordinate before a repeat count", "The line begins with a repeat count");
        }

        if (!TryReadDigits(AsdfDigits.DigitOf(c), out var times))
        {
            return false;
        }

        if (times - 1 > _maxPoints - _count)
        {
            return Fail(Invariant($"at most {_maxPoints} ordinates"), "A repeat count asks for too many ordinates");
        }

        var step = _last == Form.Difference ? _difference : 0;
        for (var more = (int)times - 1; more > 0; more--)
        {
            if (!AddStep(step))
            {
                return false;
            }
        }

        return true;
    }

    private bool AddStep(double step)
    {
        var value = _current + step;
        return Math.Abs(value) <= LargestExact
            ? Add(value)
            : Fail("sums of at most 2^53", Invariant($"The ordinate {value} is too large for differences to be exact"));
    }

    private bool Add(double value)
    {
        if (_count == _values.Length && !TryGrow())
        {
            return false;
        }

        _values[_count++] = value;
        _current = value;
        return true;
    }

    private bool TryGrow()
    {
        if (_count >= _maxPoints)
        {
            return Fail(Invariant($"at most {_maxPoints} ordinates"), "The table has too many ordinates");
        }

        Array.Resize(ref _values, (int)Math.Min(_maxPoints, 2L * _count));
        return true;
    }

    private bool TryReadDigits(int leading, out double value)
    {
        long whole = leading;
        var start = ++_position;
        while (_position < _text.Length && (uint)(_text[_position] - '0') <= 9)
        {
            whole = unchecked((whole * 10) + (_text[_position++] - '0'));
        }

        value = whole;
        return _position - start < MostDigits
            || Fail(Invariant($"at most {MostDigits} digits"), "An ordinate has too many digits to be exact");
    }

    private bool TrySkipDelimiters()
    {
        SkipDelimiters();
        return !NotANumber.StartsAt(_text[_position..])
            || Fail("finite ordinates", "An ordinate is not a finite number");
    }

    private void SkipDelimiters()
    {
        while (_position < _text.Length && AsdfDigits.KindOf(_text[_position]) == AsdfKind.Delimiter)
        {
            _position++;
        }
    }

    private readonly bool AtEndOfLine() =>
        _position >= _text.Length
        || AsdfDigits.KindOf(_text[_position]) == AsdfKind.Break
        || _text[_position..].StartsWith("$$"u8);

    private readonly bool Fail(string expected, string problem) => _log.Fail(_label, _line, expected, problem);

    private static string Unreadable(byte c) =>
        c is > 32 and < 127 ? $"'{(char)c}' is not a digit of any form" : Invariant($"Byte {c} is not a digit of any form");
}
