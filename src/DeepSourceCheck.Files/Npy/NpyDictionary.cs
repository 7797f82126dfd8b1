using System.Globalization;

using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Files.Npy;

/// <summary>The dictionary literal in a .npy header: {'descr': '...', 'fortran_order': True, 'shape': (2, 3), }.</summary>
internal sealed class NpyDictionary(string text, string displayName)
{
    private int _at;
    private bool _hasDescr, _hasOrder, _hasShape;

    public string Descr { get; private set; } = "";

    public bool FortranOrder { get; private set; }

    /// <summary>Sizes as written: whole numbers of any sign, up to 28 digits.</summary>
    public List<decimal> Shape { get; } = [];

    /// <summary>Reads the whole text.</summary>
    /// <exception cref="InputException">It is not such a dictionary.</exception>
    public void Read()
    {
        Expect('{');
        while (!TryTake('}'))
        {
            string key = Text();
            Expect(':');
            switch (key)
            {
                case "descr" when !_hasDescr:
                    (Descr, _hasDescr) = (Text(), true);
                    break;
                case "fortran_order" when !_hasOrder:
                    (FortranOrder, _hasOrder) = (Boolean(), true);
                    break;
                case "shape" when !_hasShape:
                    ReadShape();
                    _hasShape = true;
                    break;
                default:
                    throw Fault("descr, fortran_order and shape, each once, are expected as keys");
            }

            if (!TryTake(','))
            {
                Expect('}');
                break;
            }
        }

        SkipSpace();
        if (_at < text.Length || !(_hasDescr && _hasOrder && _hasShape))
        {
            throw Fault("descr, fortran_order and shape, each once and nothing else, are expected");
        }
    }

    private void ReadShape()
    {
        Expect('(');
        while (!TryTake(')'))
        {
            SkipSpace();
            int start = _at;
            _at += _at < text.Length && text[_at] == '-' ? 1 : 0;
            while (_at < text.Length && char.IsAsciiDigit(text[_at]))
            {
                _at++;
            }

            if (!decimal.TryParse(text.AsSpan(start, _at - start), NumberStyles.AllowLeadingSign, CultureInfo.InvariantCulture, out decimal size))
            {
                throw Fault("the shape must be a list of whole numbers");
            }

            // The letter that older writers put behind long numbers.
            _at += _at < text.Length && text[_at] == 'L' ? 1 : 0;
            Shape.Add(size);
            if (!TryTake(','))
            {
                Expect(')');
                break;
            }
        }
    }

    private string Text()
    {
        SkipSpace();
        char quote = _at < text.Length ? text[_at] : '\0';
        int end = quote is '\'' or '"' ? text.IndexOf(quote, _at + 1) : -1;
        if (end < 0)
        {
            throw Fault("text in quotes is expected");
        }

        string value = text[(_at + 1)..end];
        _at = end + 1;
        return value;
    }

    private bool Boolean()
    {
        SkipSpace();
        foreach ((string word, bool value) in new[] { ("True", true), ("False", false) })
        {
            if (string.CompareOrdinal(text, _at, word, 0, word.Length) == 0)
            {
                _at += word.Length;
                return value;
            }
        }

        throw Fault("fortran_order must be True or False");
    }

    private bool TryTake(char wanted)
    {
        SkipSpace();
        bool found = _at < text.Length && text[_at] == wanted;
        _at += found ? 1 : 0;
        return found;
    }

    private void Expect(char wanted)
    {
        if (!TryTake(wanted))
        {
            throw Fault($"'{wanted}' is expected");
        }
    }

    private void SkipSpace()
    {
        while (_at < text.Length && text[_at] is ' ' or '\n' or '\t' or '\r')
        {
            _at++;
        }
    }

    private InputException Fault(string expected) => new(displayName, "header", $"the header is malformed at character {_at + 1}: {expected}");
}
