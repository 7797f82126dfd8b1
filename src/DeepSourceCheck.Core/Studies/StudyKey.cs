namespace DeepSourceCheck.Core.Studies;

/// <summary>What stands in for a key that a study leaves out.</summary>
/// <param name="Value">Number, text or list of numbers, in the key's unit.</param>
/// <param name="Source">Where it comes from.</param>
/// <param name="Grade">How well that source is known.</param>
/// <param name="For">The case it holds for (`planar-gradiometer`), or empty where it always holds.</param>
public sealed record KeyDefault(object Value, string Source, Grade Grade, string For = "");

/// <summary>Range in which values of a key usually lie, in the key's unit.</summary>
/// <param name="Low">Smallest usual value, in the unit of the key.</param>
/// <param name="High">Largest usual value, in the unit of the key.</param>
public sealed record TypicalRange(double Low, double High);

/// <summary>Everything the program knows about one key of a study file: the reader, the assumptions and every explanation draw on it.</summary>
/// <param name="Path">Full path; entries of a list are written `[]`: `head.spheres.layers[].radius_mm`.</param>
/// <param name="Description">One sentence.</param>
/// <param name="Shapes">Forms that the program acts on.</param>
public sealed record StudyKey(string Path, string Description, params KeyShape[] Shapes)
{
    /// <summary>Unit, or empty.</summary>
    public string Unit { get; init; } = "";

    /// <summary>An example value as YAML writes it.</summary>
    public string Example { get; init; } = "";

    /// <summary>Defaults: none, one, or one for each case.</summary>
    public IReadOnlyList<KeyDefault> Defaults { get; init; } = [];

    /// <summary>Usual values, or null where none are published.</summary>
    public TypicalRange? Typical { get; init; }

    /// <summary>True: must stand wherever its parent stands.</summary>
    public bool Required { get; init; }

    /// <summary>Null: the program acts on the key. Else it is refused as not supported yet, and this says what to do instead.</summary>
    public string? NotYet { get; init; }

    /// <summary>Forms that are part of the language but refused as not supported yet.</summary>
    public IReadOnlyList<KeyShape> ShapesNotYet { get; init; } = [];

    /// <summary>What to do instead of a form or word that is not supported yet.</summary>
    public string InsteadOfShape { get; init; } = "";

    /// <summary>True: a name that only labels the output and does not enter the answer.</summary>
    public bool LabelOnly { get; init; }

    /// <summary>Last part of the path.</summary>
    public string Name => Path[(Path.LastIndexOf('.') + 1)..];

    /// <summary>Path of the map that holds the key; empty for the top level.</summary>
    public string Parent => Path.LastIndexOf('.') is > 0 and var dot ? Path[..dot] : "";

    /// <summary>What is allowed, in words that finish "must be ...".</summary>
    public string Allowed => string.Join("; or ", Shapes.Select(shape => shape.Allowed(Unit)));

    /// <summary>The default for a case, or null.</summary>
    public KeyDefault? DefaultFor(string useCase = "") => Defaults.FirstOrDefault(d => d.For == useCase || d.For.Length == 0);
}
