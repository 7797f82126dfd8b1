namespace DeepSourceCheck.Tests.Support;

/// <summary>A folder of its own for one test, removed afterwards.</summary>
internal sealed class ScratchFolder : IDisposable
{
    public string Path { get; } = Directory.CreateTempSubdirectory("deepsourcecheck-test-").FullName;

    /// <summary>Path of a file in the folder.</summary>
    public string At(string name) => System.IO.Path.Combine(Path, name);

    /// <summary>Writes a file and returns its path.</summary>
    public string Write(string name, byte[] bytes)
    {
        File.WriteAllBytes(At(name), bytes);
        return At(name);
    }

    /// <summary>Writes a file as UTF-8 without byte order mark and returns its path.</summary>
    public string Write(string name, string text) => Write(name, System.Text.Encoding.UTF8.GetBytes(text));

    public void Dispose() => Directory.Delete(Path, recursive: true);
}
