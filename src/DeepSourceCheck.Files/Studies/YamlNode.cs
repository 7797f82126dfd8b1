namespace DeepSourceCheck.Files.Studies;

/// <summary>A node of a YAML document with its place in the text.</summary>
/// <param name="Line">Line, from 1.</param>
/// <param name="Column">Column, from 1.</param>
public abstract record YamlNode(int Line, int Column)
{
    /// <summary>What it is, for messages: `a list`.</summary>
    public abstract string What { get; }
}

/// <summary>A scalar.</summary>
/// <param name="Text">Its text.</param>
/// <param name="Plain">True: neither quoted nor tagged as text, so that it may be a number, a flag or empty.</param>
/// <param name="Line">Line, from 1.</param>
/// <param name="Column">Column, from 1.</param>
public sealed record YamlScalar(string Text, bool Plain, int Line, int Column) : YamlNode(Line, Column)
{
    /// <inheritdoc/>
    public override string What => "a single value";

    /// <summary>True for an empty value, `~` and `null`.</summary>
    public bool IsNull => Plain && Text is ("" or "~" or "null" or "Null" or "NULL");
}

/// <summary>A list.</summary>
/// <param name="Items">Its items.</param>
/// <param name="Line">Line, from 1.</param>
/// <param name="Column">Column, from 1.</param>
public sealed record YamlList(IReadOnlyList<YamlNode> Items, int Line, int Column) : YamlNode(Line, Column)
{
    /// <inheritdoc/>
    public override string What => "a list";
}

/// <summary>Keys with values, in the order of the file; no key twice.</summary>
/// <param name="Entries">Its entries.</param>
/// <param name="Line">Line, from 1.</param>
/// <param name="Column">Column, from 1.</param>
public sealed record YamlMap(IReadOnlyList<YamlEntry> Entries, int Line, int Column) : YamlNode(Line, Column)
{
    /// <inheritdoc/>
    public override string What => "keys with values";
}

/// <summary>A node that was refused and reported; nothing more is said about it.</summary>
/// <param name="Line">Line, from 1.</param>
/// <param name="Column">Column, from 1.</param>
public sealed record YamlRefused(int Line, int Column) : YamlNode(Line, Column)
{
    /// <inheritdoc/>
    public override string What => "a refused value";
}

/// <summary>A key and its value.</summary>
/// <param name="Name">The key.</param>
/// <param name="Value">The value.</param>
/// <param name="Line">Line of the key, from 1.</param>
/// <param name="Column">Column of the key, from 1.</param>
public sealed record YamlEntry(string Name, YamlNode Value, int Line, int Column);
