namespace DeepSourceCheck.Examples;

/// <summary>The repository that the tests were built from.</summary>
internal static class SourceTree
{
    /// <summary>The folder that holds DeepSourceCheck.sln.</summary>
    public static string Root { get; } = Find();

    /// <summary>A numbered study.</summary>
    public static string Study(params string[] name) => Path.Combine([Root, "tests", "DeepSourceCheck.Examples", "Studies", .. name]);

    private static string Find()
    {
        for (string? folder = AppContext.BaseDirectory; folder is not null; folder = Path.GetDirectoryName(folder))
        {
            if (File.Exists(Path.Combine(folder, "DeepSourceCheck.sln")))
            {
                return folder;
            }
        }

        throw new InvalidOperationException($"no DeepSourceCheck.sln above {AppContext.BaseDirectory}");
    }
}
