using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Core.Results;

/// <summary>One number of the chain from moment to minutes, with all that is needed to recompute it.</summary>
/// <param name="Name">Symbol and words, for instance `A: amplitude at Cz-mastoids`.</param>
/// <param name="Symbol">Symbol by which other lines refer to it.</param>
/// <param name="Value">Value in <paramref name="Unit"/>; for counts an integer.</param>
/// <param name="Unit">Unit, or empty.</param>
/// <param name="Formula">Formula in the symbols of earlier lines; empty for inputs.</param>
/// <param name="Source">Published source, or where the input comes from.</param>
/// <param name="Grade">Grade of the source, or null.</param>
public sealed record DerivedNumber(string Symbol, string Name, double Value, string Unit, string Formula, string Source, Grade? Grade);
