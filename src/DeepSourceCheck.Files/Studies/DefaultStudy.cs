using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Files.Studies;

/// <summary>The study that runs when none is given.</summary>
public static class DefaultStudy
{
    /// <summary>Its name where other studies have a path.</summary>
    public const string Name = "default study";

    /// <summary>Its text.</summary>
    public static string Text { get; } = StudyResource.Text("default-study.yaml");

    /// <summary>The study as read; relative paths are taken against the current folder.</summary>
    /// <param name="purpose">What the study is read for.</param>
    /// <param name="libraryRegions">Names of the library's regions.</param>
    /// <exception cref="InputException">The library lacks a region that the study names.</exception>
    public static StudyReading Read(Purpose purpose, IReadOnlyCollection<string> libraryRegions) =>
        StudyReader.ReadText(Text, Name, ".", purpose, libraryRegions);
}
