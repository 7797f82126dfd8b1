using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Files;

/// <summary>Opens input files and says plainly why one cannot be read.</summary>
internal static class InputFileAccess
{
    /// <summary>Opens a regular file that is not empty, for reading.</summary>
    /// <exception cref="InputException">It is missing, a folder, empty or not readable.</exception>
    public static FileStream Open(string path, string displayName)
    {
        Require(path, displayName);
        return Guard(displayName, () => new FileStream(path, FileMode.Open, FileAccess.Read, FileShare.Read, 1 << 16, FileOptions.SequentialScan));
    }

    /// <summary>The whole of a small file.</summary>
    /// <param name="path">File.</param>
    /// <param name="displayName">As the user named it.</param>
    /// <param name="largest">Largest size [bytes] that is read.</param>
    /// <exception cref="InputException">As <see cref="Open"/>, or the file is larger.</exception>
    public static byte[] ReadAll(string path, string displayName, long largest)
    {
        Require(path, displayName);
        return Guard(displayName, () =>
        {
            long length = new FileInfo(path).Length;
            return length <= largest
                ? File.ReadAllBytes(path)
                : throw new InputException(displayName, null, $"the file has {length:N0} bytes, more than the {largest:N0} that a file of this kind may have");
        });
    }

    /// <summary>Runs an operation on a file and turns failures of the file system into messages.</summary>
    public static T Guard<T>(string displayName, Func<T> operation)
    {
        try
        {
            return operation();
        }
        catch (Exception error) when (error is IOException or UnauthorizedAccessException or ArgumentException or NotSupportedException)
        {
            string reason = error is UnauthorizedAccessException ? "permission is denied" : FirstLine(error.Message);
            throw new InputException(displayName, null, $"the file cannot be read: {reason}");
        }
    }

    private static void Require(string path, string displayName)
    {
        FileInfo file = Guard(displayName, () => new FileInfo(path));
        string? fault = Directory.Exists(path) ? "is a folder; a file is needed"
            : !file.Exists ? "the file does not exist; check the name: a path in a study is relative to the study file, one on the command line to the current folder"
            : file.Length == 0 ? "the file is empty (0 bytes)"
            : null;
        if (fault is not null)
        {
            throw new InputException(displayName, null, fault);
        }
    }

    private static string FirstLine(string text) => text.Split('\n')[0].TrimEnd('\r', '.');
}
