using System.Diagnostics;

namespace DeepSourceCheck.Tests.House;

/// <summary>The repository that the tests were built from, found from their output folder upwards.</summary>
internal static class Repository
{
    /// <summary>The folder that holds DeepSourceCheck.sln.</summary>
    public static string Root { get; } = Find();

    /// <summary>A path below the root.</summary>
    public static string At(params string[] parts) => Path.Combine([Root, .. parts]);

    /// <summary>Source files below a folder of the repository, generated ones left out; relative to the root with forward slashes.</summary>
    public static IEnumerable<string> Files(string folder, string pattern) =>
        Directory.EnumerateFiles(At(folder), pattern, SearchOption.AllDirectories)
            .Select(f => Path.GetRelativePath(Root, f).Replace('\\', '/'))
            .Where(f => !f.Split('/').Any(part => part is "obj" or "bin" || part.StartsWith('.')))
            .Order(StringComparer.Ordinal);

    /// <summary>The files that belong to the repository: those that git tracks, or, in an unpacked archive without git, all that a clean one holds.</summary>
    public static IReadOnlyList<string> Tracked()
    {
        if (Path.Exists(At(".git")))
        {
            var start = new ProcessStartInfo("git") { WorkingDirectory = Root, RedirectStandardOutput = true, RedirectStandardError = true };
            foreach (string argument in new[] { "-c", "safe.directory=*", "ls-files", "-z" })
            {
                start.ArgumentList.Add(argument);
            }

            using Process git = Process.Start(start)!;
            string output = git.StandardOutput.ReadToEnd();
            git.WaitForExit();
            Assert.True(git.ExitCode == 0, "git ls-files failed: " + git.StandardError.ReadToEnd());
            return output.Split('\0', StringSplitOptions.RemoveEmptyEntries);
        }

        return [.. Files(".", "*")];
    }

    private static string Find()
    {
        for (string? folder = AppContext.BaseDirectory; folder is not null; folder = Path.GetDirectoryName(folder))
        {
            if (File.Exists(Path.Combine(folder, "DeepSourceCheck.sln")))
            {
                return folder;
            }
        }

        throw new InvalidOperationException($"no DeepSourceCheck.sln above {AppContext.BaseDirectory}: the house tests need the source tree");
    }
}
