using System.Globalization;

using DeepSourceCheck.Core.Studies;

using YamlDotNet.Core;
using YamlDotNet.Core.Events;

namespace DeepSourceCheck.Files.Studies;

/// <summary>Reads one YAML document into nodes that know their line and column.</summary>
/// <remarks>
/// Works on parser events, so that an unclosed bracket has a position and nothing is ever expanded: anchors, aliases, merge keys, tags beyond the core schema,
/// keys that are not single values, duplicate keys and further documents are refused. Nesting and the number of nodes are limited while reading.
/// </remarks>
public sealed class YamlTree
{
    /// <summary>Deepest nesting of lists and maps.</summary>
    public const int DeepestNesting = 32;

    /// <summary>Largest number of nodes of a document.</summary>
    public const int MostNodes = 50_000;

    private const int MostProblems = 50;
    private const string CoreTag = "tag:yaml.org,2002:";

    private readonly string _file;
    private readonly List<InputProblem> _problems;
    private readonly Parser _parser;
    private readonly Stack<Mark> _openBrackets = new();
    private int _nodes;

    private YamlTree(string text, string file, List<InputProblem> problems)
    {
        _file = file;
        _problems = problems;
        _parser = new Parser(new StringReader(text));
    }

    /// <summary>The document's root; null for an empty document.</summary>
    /// <param name="text">The text.</param>
    /// <param name="file">The file's name, for messages.</param>
    /// <param name="problems">Receives what was refused while the rest could still be read.</param>
    /// <exception cref="InputException">The text cannot be read further: holds every problem up to there.</exception>
    public static YamlNode? Parse(string text, string file, List<InputProblem> problems) => new YamlTree(text, file, problems).Document();

    /// <summary>The document's root; null for an empty document.</summary>
    /// <exception cref="InputException">Anything is refused.</exception>
    public static YamlNode? Parse(string text, string file)
    {
        var problems = new List<InputProblem>();
        YamlNode? root = Parse(text, file, problems);
        return problems.Count == 0 ? root : throw new InputException(problems);
    }

    private YamlNode? Document()
    {
        Next();
        if (Next() is not DocumentStart)
        {
            return null;
        }

        YamlNode root = Node(Next(), 0);
        Next();
        if (Next() is DocumentStart second)
        {
            throw Fatal(second.Start, "a second document starts here; a file holds one document: remove everything from `---` on, or split the file");
        }

        return root;
    }

    private YamlNode Node(ParsingEvent current, int depth)
    {
        if (++_nodes > MostNodes)
        {
            throw Fatal(current.Start, $"the file holds more than {MostNodes} values; split it or use tables");
        }

        if (depth > DeepestNesting)
        {
            throw Fatal(current.Start, $"lists and maps are nested deeper than {DeepestNesting} levels; no key needs that");
        }

        switch (current)
        {
            case AnchorAlias alias:
                return Refuse(alias.Start, $"the alias *{Shown.Text(alias.Value.Value)} is refused: write the value out instead of referring to it");
            case Scalar scalar:
                return Checked(scalar, Scalar(scalar));
            case SequenceStart start:
                return Checked(start, List(start, depth));
            case MappingStart start:
                return Checked(start, Map(start, depth));
            default:
                throw Fatal(current.Start, "a value is missing here");
        }
    }

    private static YamlScalar Scalar(Scalar scalar)
    {
        bool plain = scalar.Style is ScalarStyle.Plain or ScalarStyle.Any;
        string tag = TagOf(scalar);
        if (tag is CoreTag + "str")
        {
            plain = false;
        }
        else if (tag is CoreTag + "int" or CoreTag + "float" or CoreTag + "bool" or CoreTag + "null")
        {
            plain = true;
        }

        return new YamlScalar(scalar.Value, plain, Line(scalar.Start), Column(scalar.Start));
    }

    private YamlList List(SequenceStart start, int depth)
    {
        bool flow = start.Style == SequenceStyle.Flow;
        Open(flow, start.Start);
        var items = new List<YamlNode>();
        for (ParsingEvent next = Next(); next is not SequenceEnd; next = Next())
        {
            items.Add(Node(next, depth + 1));
        }

        Close(flow);
        return new(items, Line(start.Start), Column(start.Start));
    }

    private YamlMap Map(MappingStart start, int depth)
    {
        bool flow = start.Style == MappingStyle.Flow;
        Open(flow, start.Start);
        var entries = new List<YamlEntry>();
        var places = new Dictionary<string, Mark>(StringComparer.Ordinal);
        for (ParsingEvent next = Next(); next is not MappingEnd; next = Next())
        {
            Mark place = next.Start;
            YamlNode key = Node(next, depth + 1);
            YamlNode value = Node(Next(), depth + 1);
            if (key is not YamlScalar { Text: var name })
            {
                if (key is not YamlRefused)
                {
                    Refuse(place, $"a key must be a single word, here it is {key.What}");
                }
            }
            else if (name == "<<")
            {
                Refuse(place, "the merge key << is refused: write the keys out");
            }
            else if (!places.TryAdd(name, place))
            {
                Mark first = places[name];
                Refuse(place, $"the key {Shown.Quoted(name)} stands twice, first at line {Line(first)}, column {Column(first)}; remove one of them");
            }
            else
            {
                entries.Add(new(name, value, Line(place), Column(place)));
            }
        }

        Close(flow);
        return new(entries, Line(start.Start), Column(start.Start));
    }

    /// <summary>The node, or a refusal where it carries an anchor or a tag of its own.</summary>
    private YamlNode Checked(NodeEvent current, YamlNode node)
    {
        if (!current.Anchor.IsEmpty)
        {
            return Refuse(current.Start, $"the anchor &{Shown.Text(current.Anchor.Value)} is refused: write each value out where it is used");
        }

        string tag = TagOf(current);
        bool known = tag is "" or "?" || node switch
        {
            YamlScalar => tag is CoreTag + "str" or CoreTag + "int" or CoreTag + "float" or CoreTag + "bool" or CoreTag + "null"
                || tag == "!" && ((Scalar)current).Style is not (ScalarStyle.Plain or ScalarStyle.Any),
            YamlList => tag == CoreTag + "seq",
            _ => tag == CoreTag + "map",
        };
        return known ? node : Refuse(current.Start, $"the tag {Shown.Text(tag)} is refused: write the plain value");
    }

    private static string TagOf(NodeEvent current) => current.Tag.IsEmpty ? "" : current.Tag.Value;

    private void Open(bool flow, Mark start)
    {
        if (flow)
        {
            _openBrackets.Push(start);
        }
    }

    private void Close(bool flow)
    {
        if (flow)
        {
            _openBrackets.Pop();
        }
    }

    private ParsingEvent Next()
    {
        try
        {
            return _parser.MoveNext() && _parser.Current is { } current ? current : throw Fatal(Mark.Empty, "the file ends too early");
        }
        catch (YamlException e)
        {
            throw Fatal(e.Start, $"this is not YAML: {Sentence(e.Message)}{OpenBracket()}{Indentation(e.Message)}");
        }
        catch (Exception e) when (e is ArgumentException or InvalidOperationException or FormatException or ArithmeticException
            or IndexOutOfRangeException or KeyNotFoundException)
        {
            // The parser throws these instead of its own on some broken texts.
            throw Fatal(_parser.Current?.End ?? Mark.Empty, $"this is not YAML: the text after this place cannot be read{OpenBracket()}");
        }
    }

    private string OpenBracket() =>
        _openBrackets.TryPeek(out Mark bracket) ? $"; the bracket opened at line {Line(bracket)}, column {Column(bracket)} is not closed" : "";

    // What a beginner's broken indentation looks like to the parser.
    private string Indentation(string message) =>
        message.Contains("tab", StringComparison.OrdinalIgnoreCase) ? "; indent with spaces, never with tabs"
        : _openBrackets.Count == 0 && message.Contains("expected key", StringComparison.OrdinalIgnoreCase)
            ? "; keys of one section start in one column: check the spaces before this line and the one above" : "";

    private static string Sentence(string message)
    {
        string text = Shown.Text(message.TrimEnd('.'), 160);
        return text.Length > 0 ? char.ToLower(text[0], CultureInfo.InvariantCulture) + text[1..] : "unreadable";
    }

    private YamlRefused Refuse(Mark mark, string message)
    {
        _problems.Add(new(_file, Line(mark), Column(mark), null, message));
        if (_problems.Count >= MostProblems)
        {
            throw new InputException(_problems);
        }

        return new(Line(mark), Column(mark));
    }

    private InputException Fatal(Mark mark, string message)
    {
        _problems.Add(new(_file, Line(mark), Column(mark), null, message));
        return new(_problems);
    }

    private static int Line(Mark mark) => (int)Math.Clamp(mark.Line, 1, int.MaxValue);

    private static int Column(Mark mark) => (int)Math.Clamp(mark.Column, 1, int.MaxValue);
}
