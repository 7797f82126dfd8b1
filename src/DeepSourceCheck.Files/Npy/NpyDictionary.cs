using System.Globalization;

using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Files.Npy;

/// <summary>The dictionary literal in a .npy header: {'descr': '...', 'fortran_order': True, 'shape': (2, 3), }.</summary>
internal sealed class NpyDictionary(string text, string displayName)
{
    private int at;
    private bool hasDescr, hasOrder, hasShape;

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
                case "descr" when !hasDescr:
                    (Descr, hasDescr) = (Text(), true);
                    break;
                case "fortran_order" when !hasOrder:
                    (FortranOrder, hasOrder) = (Boolean(), true);
                    break;
                case "shape" when !hasShape:
                    ReadShape();
                    hasShape = true;
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
        if (at < text.Length || !(hasDescr && hasOrder && hasShape))
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
            int start = at;
            at += at < text.Length && text[at] == '-' ? 1 : 0;
            while (at < text.Length && char.IsAsciiDigit(text[at]))
            {
                at++;
            }

            if (!decimal.TryParse(text.AsSpan(start, at - start), NumberStyles.AllowLeadingSign, CultureInfo.InvariantCulture, out decimal size))
            {
                throw Fault("the shape must be a list of whole numbers");
            }

            // The letter that older writers put behind long numbers.
            at += at < text.Length && text[at] == 'L' ? 1 : 0;
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
        char quote = at < text.Length ? text[at] : '\0';
        int end = quote is '\'' or '"' ? text.IndexOf(quote, at + 1) : -1;
        if (end < 0)
        {
            throw Fault("text in quotes is expected");
        }

        string value = text[(at + 1)..end];
        at = end + 1;
        return value;
    }

    private bool Boolean()
    {
        SkipSpace();
        foreach ((string word, bool value) in new[] { ("True", true), ("False", false) })
        {
            if (string.CompareOrdinal(text, at, word, 0, word.Length) == 0)
            {
                at += word.Length;
                return value;
            }
        }

        throw Fault("fortran_order must be True or False");
    }

    private bool TryTake(char wanted)
    {
        SkipSpace();
        bool found = at < text.Length && text[at] == wanted;
        at += found ? 1 : 0;
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
        while (at < text.Length && text[at] is ' ' or '\n' or '\t' or '\r')
        {
            at++;
        }
    }

    private InputException Fault(string expected) => new(displayName, "header", $"the header is malformed at character {at + 1}: {expected}");
}
