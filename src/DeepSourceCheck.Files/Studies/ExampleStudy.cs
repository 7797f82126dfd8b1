namespace DeepSourceCheck.Files.Studies;

/// <summary>The commented study from which a user starts: runs as it is and shows every key that the program acts on. Its scenario is invented.</summary>
public static class ExampleStudy
{
    /// <summary>Its text.</summary>
    public static string Text { get; } = StudyResource.Text("example-study.yaml");
}
