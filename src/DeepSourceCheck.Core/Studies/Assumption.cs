namespace DeepSourceCheck.Core.Studies;

/// <summary>A value that entered the answer.</summary>
/// <param name="Key">Full key in the study.</param>
/// <param name="Value">Number, text or list of numbers, in the key's unit.</param>
/// <param name="Unit">Unit, or empty.</param>
/// <param name="FromStudy">True: stated by the study; false: a default.</param>
/// <param name="Source">Where the default comes from; `stated by the study`.</param>
/// <param name="Grade">Grade of the source; null for stated values.</param>
public sealed record Assumption(string Key, object Value, string Unit, bool FromStudy, string Source, Grade? Grade);

/// <summary>Where a value comes from.</summary>
public enum Grade
{
    /// <summary>The number stood in the source that was read.</summary>
    Seen,

    /// <summary>From memory of the named source.</summary>
    Memory,

    /// <summary>Derived with stated formulas from stated inputs.</summary>
    Derived,
}
