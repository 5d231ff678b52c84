using System.Collections.Immutable;

namespace Qc.Engine.Prediction.Environments;

/// <summary>Reads the notation of <see cref="EnvironmentPattern"/>.</summary>
internal sealed class EnvironmentPatternReader
{
    private readonly string _text;
    private readonly ImmutableArray<PatternAtom>.Builder _atoms = ImmutableArray.CreateBuilder<PatternAtom>();
    private int _at;

    private EnvironmentPatternReader(string text) => _text = text;

    /// <summary>Reads a pattern.</summary>
    /// <exception cref="FormatException">The text is not in the notation; tables are part of the program, so this is a defect of a table.</exception>
    public static EnvironmentPattern Read(string text)
    {
        var reader = new EnvironmentPatternReader(text);
        reader.ReadTree(-1, '~');
        return reader._at == text.Length ? new EnvironmentPattern(text, reader._atoms.ToImmutable()) : throw reader.Unexpected();
    }

    private char Current => _at < _text.Length ? _text[_at] : '\0';

    private void ReadTree(int parent, char bond)
    {
        int atom = ReadAtom(parent, bond);
        while (Current == '(')
        {
            _at++;
            ReadTree(atom, ReadBond());
            if (Current != ')')
            {
                throw Unexpected();
            }

            _at++;
        }

        if (_at < _text.Length && Current != ')')
        {
            ReadTree(atom, ReadBond());
        }
    }

    private char ReadBond()
    {
        char bond = Current;
        if (!"-=#:~".Contains(bond, StringComparison.Ordinal))
        {
            throw Unexpected();
        }

        _at++;
        return bond;
    }

    private int ReadAtom(int parent, char bond)
    {
        ImmutableArray<string> symbols = [];
        ImmutableArray<string> properties = [];
        string? substituent = null;
        if (Current == '{')
        {
            substituent = ReadUntil('}');
        }
        else if (Current == '[')
        {
            string[] parts = ReadUntil(']').Split(';');
            symbols = [.. parts[0].Split(',')];
            properties = [.. parts.Skip(1)];
        }
        else
        {
            symbols = [ReadSymbol()];
        }

        if (!symbols.All(PatternAtom.IsSymbol) || !properties.All(PatternAtom.IsProperty))
        {
            throw Unexpected();
        }

        bool isEnd = Current == '@';
        _at += isEnd ? 1 : 0;
        _atoms.Add(new PatternAtom(parent, bond, symbols, properties, substituent, isEnd));
        return _atoms.Count - 1;
    }

    private string ReadUntil(char close)
    {
        int end = _text.IndexOf(close, _at);
        if (end < 0)
        {
            throw Unexpected();
        }

        string inner = _text[(_at + 1)..end];
        _at = end + 1;
        return inner;
    }

    private string ReadSymbol()
    {
        int length = _at + 1 < _text.Length && PatternAtom.Elements.ContainsKey(_text.Substring(_at, 2)) ? 2 : 1;
        if (_at + length > _text.Length)
        {
            throw Unexpected();
        }

        string symbol = _text.Substring(_at, length);
        _at += length;
        return symbol;
    }

    private FormatException Unexpected() => new($"Pattern '{_text}': not understood near character {_at + 1}.");
}
