using DeepSourceCheck.Core.Heads;

namespace DeepSourceCheck.Core.Studies;

/// <summary>Which head.</summary>
public abstract record HeadChoice;

/// <summary>Layered spheres.</summary>
/// <param name="Sphere">The head.</param>
/// <param name="Preset">Name of the preset, or null for stated layers.</param>
/// <param name="LibraryScale">Factor by which library regions scale about the centre (child and neonate presets), else 1.</param>
public sealed record SphereHeadChoice(LayeredSphere Sphere, string? Preset, double LibraryScale) : HeadChoice;

/// <summary>Imported leadfields: paths relative to the study.</summary>
public sealed record ImportedHeadChoice(string? Eeg, string? Meg, string Points, string Rows) : HeadChoice;
