using System.Globalization;

namespace DeepSourceCheck.Core.Studies;

/// <summary>One form that the value of a key may take.</summary>
public abstract record KeyShape
{
    /// <summary>What is allowed, in words that finish "must be ...".</summary>
    /// <param name="unit">Unit of the key, or empty.</param>
    public abstract string Allowed(string unit);

    /// <summary>A number as study files write it.</summary>
    public static string Text(double value)
    {
        bool extreme = Math.Abs(value) is >= 1e15 or (> 0 and < 1e-4);
        return value.ToString(extreme ? "0.###e+0" : "0.############", CultureInfo.InvariantCulture);
    }

    private protected static string With(string unit) => unit.Length > 0 ? " " + unit : "";
}

/// <summary>A number in a range, in the key's unit.</summary>
/// <param name="Low">Smallest value, in the unit of the key.</param>
/// <param name="High">Largest value, in the unit of the key.</param>
/// <param name="AboveLow">True: the smallest value itself is not allowed.</param>
/// <param name="BelowHigh">True: the largest value itself is not allowed.</param>
/// <param name="Whole">True: whole numbers only.</param>
public sealed record NumberShape(double Low, double High, bool AboveLow = false, bool BelowHigh = false, bool Whole = false) : KeyShape
{
    /// <summary>True when <paramref name="value"/> lies in the range; never for NaN.</summary>
    public bool Admits(double value) =>
        (AboveLow ? value > Low : value >= Low) && (BelowHigh ? value < High : value <= High) && (!Whole || Math.Floor(value) == value);

    /// <inheritdoc/>
    public override string Allowed(string unit) =>
        $"a {(Whole ? "whole " : "")}number {(AboveLow ? "above" : "from")} {Text(Low)} {(BelowHigh ? "to below" : "up to")} {Text(High)}{With(unit)}";
}

/// <summary>True or false.</summary>
public sealed record FlagShape : KeyShape
{
    /// <inheritdoc/>
    public override string Allowed(string unit) => "true or false";
}

/// <summary>A text of the user's own.</summary>
/// <param name="What">What it names: `a name`.</param>
/// <param name="LongestLength">Largest number of characters.</param>
public sealed record TextShape(string What, int LongestLength = 200) : KeyShape
{
    /// <inheritdoc/>
    public override string Allowed(string unit) => $"{What}, at most {LongestLength} characters";
}

/// <summary>A path to a file, relative to the study file.</summary>
/// <param name="What">What the file holds.</param>
public sealed record FileShape(string What) : KeyShape
{
    /// <summary>Largest number of characters of a path.</summary>
    public const int LongestLength = 1000;

    /// <inheritdoc/>
    public override string Allowed(string unit) => $"the path of {What}, relative to the study file";
}

/// <summary>One of a few words.</summary>
/// <param name="Words">Words that the program acts on.</param>
public sealed record ChoiceShape(IReadOnlyList<string> Words) : KeyShape
{
    /// <summary>Words of the study file's language that are refused as not supported yet.</summary>
    public IReadOnlyList<string> NotYet { get; init; } = [];

    /// <inheritdoc/>
    public override string Allowed(string unit) => Words.Count == 1 ? Words[0] : string.Join(", ", Words.Take(Words.Count - 1)) + " or " + Words[^1];
}

/// <summary>A fixed number of numbers, written [a, b, c].</summary>
/// <param name="Count">How many.</param>
/// <param name="Each">Range of each.</param>
public sealed record VectorShape(int Count, NumberShape Each) : KeyShape
{
    /// <inheritdoc/>
    public override string Allowed(string unit) => $"{Count} numbers [x, y, z], each from {Text(Each.Low)} to {Text(Each.High)}{With(unit)}";
}

/// <summary>A list of numbers whose length another key sets.</summary>
/// <param name="What">What each of them is: `the share of a region`.</param>
/// <param name="Each">Range of each.</param>
public sealed record NumberListShape(string What, NumberShape Each) : KeyShape
{
    /// <inheritdoc/>
    public override string Allowed(string unit) => $"a list of numbers, each {What}, from {Text(Each.Low)} to {Text(Each.High)}{With(unit)}";
}

/// <summary>A band [low, high] with low below high.</summary>
/// <param name="Each">Range of each edge.</param>
public sealed record BandShape(NumberShape Each) : KeyShape
{
    /// <inheritdoc/>
    public override string Allowed(string unit) => $"two numbers [low, high], low below high, from {Text(Each.Low)} to {Text(Each.High)}{With(unit)}";
}

/// <summary>A list of texts.</summary>
/// <param name="What">What each of them is: `the name of a region`.</param>
/// <param name="Fewest">Smallest number of entries.</param>
public sealed record TextListShape(string What, int Fewest = 1) : KeyShape
{
    /// <inheritdoc/>
    public override string Allowed(string unit) => Fewest > 0 ? $"a list of at least {Fewest}, each {What}" : $"a list, each {What}";
}

/// <summary>Keys of its own, listed in the registry below this one.</summary>
public sealed record MapShape : KeyShape
{
    /// <inheritdoc/>
    public override string Allowed(string unit) => "keys with values";
}

/// <summary>A list of entries, each with keys of its own; the registry lists them below `key[]`.</summary>
/// <param name="What">What each entry is: `a layer`.</param>
public sealed record ListShape(string What) : KeyShape
{
    /// <inheritdoc/>
    public override string Allowed(string unit) => $"a list with at least one entry, each {What}";
}
