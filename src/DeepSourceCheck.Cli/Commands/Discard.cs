using DeepSourceCheck.Report;

namespace DeepSourceCheck.Cli.Commands;

/// <summary>Removes an unfinished result folder while its run may still be writing into it.</summary>
internal static class Discard
{
    /// <summary>Removes the temporary folder.</summary>
    /// <exception cref="IOException">Something was written meanwhile: call again.</exception>
    public static void Whole(ResultFolder folder)
    {
        folder.Dispose();
        if (Directory.Exists(folder.Folder))
        {
            Directory.Delete(folder.Folder, recursive: true);
        }
    }
}
