using System.Reflection;

namespace DeepSourceCheck.Files.Studies;

/// <summary>Studies that travel inside the program.</summary>
internal static class StudyResource
{
    /// <summary>The text of an embedded study, line ends as in the file.</summary>
    public static string Text(string name)
    {
        using Stream stream = Assembly.GetExecutingAssembly().GetManifestResourceStream("studies/" + name)
            ?? throw new InvalidOperationException($"The program holds no embedded study {name}.");
        using var reader = new StreamReader(stream);
        return reader.ReadToEnd();
    }
}
