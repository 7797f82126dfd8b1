using System.Net;
using System.Text;

namespace DeepSourceCheck.Report.Html;

/// <summary>Builds markup. Every text and attribute value passes through <see cref="Escape"/>; only <see cref="Raw"/> does not.</summary>
/// <remarks>What it writes is well-formed XML as well as HTML.</remarks>
internal sealed class Markup
{
    private readonly StringBuilder _text = new();
    private readonly Stack<string> _open = new();

    /// <summary>Text for element content and quoted attributes.</summary>
    public static string Escape(string value)
    {
        StringBuilder clean = new(value.Length);
        foreach (char c in value)
        {
            // Control characters are not allowed in markup at all.
            clean.Append(c < ' ' && c is not ('\t' or '\n') || c is '\u007f' or '\ufffe' or '\uffff' ? '\ufffd' : c);
        }

        return WebUtility.HtmlEncode(clean.ToString());
    }

    /// <summary>Opens an element; attributes as name, value, name, value.</summary>
    public Markup Open(string tag, params ReadOnlySpan<string> attributes)
    {
        Start(tag, attributes).Append('>');
        _open.Push(tag);
        return this;
    }

    /// <summary>Closes the innermost element.</summary>
    public Markup Close()
    {
        _text.Append("</").Append(_open.Pop()).Append('>');
        return this;
    }

    /// <summary>Closes the innermost element and ends the line.</summary>
    public Markup CloseLine()
    {
        Close();
        _text.Append('\n');
        return this;
    }

    /// <summary>An element without content.</summary>
    public Markup Void(string tag, params ReadOnlySpan<string> attributes)
    {
        Start(tag, attributes).Append("/>");
        return this;
    }

    /// <summary>An element that holds text only.</summary>
    public Markup Element(string tag, string content, params ReadOnlySpan<string> attributes)
    {
        Open(tag, attributes);
        return Text(content).Close();
    }

    /// <summary>Escaped text.</summary>
    public Markup Text(string content)
    {
        _text.Append(Escape(content));
        return this;
    }

    /// <summary>Markup made elsewhere in this program.</summary>
    public Markup Raw(string markup)
    {
        _text.Append(markup);
        return this;
    }

    /// <inheritdoc/>
    public override string ToString() =>
        _open.Count == 0 ? _text.ToString() : throw new InvalidOperationException($"The element {_open.Peek()} is not closed.");

    private StringBuilder Start(string tag, ReadOnlySpan<string> attributes)
    {
        _text.Append('<').Append(tag);
        for (int k = 0; k < attributes.Length; k += 2)
        {
            _text.Append(' ').Append(attributes[k]).Append("=\"").Append(Escape(attributes[k + 1])).Append('"');
        }

        return _text;
    }
}
