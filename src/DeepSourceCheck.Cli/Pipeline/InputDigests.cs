using System.Security.Cryptography;
using System.Text;

using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Files.Studies;

namespace DeepSourceCheck.Cli.Pipeline;

/// <summary>Files that a study names: where they are, and the digests of those that were read.</summary>
internal sealed class InputDigests
{
    private readonly StudyReading _reading;

    // The digest of the study is taken beside what follows: the first one waits for the cryptographic library to load.
    private readonly List<Noted> _files;

    public InputDigests(StudyReading reading)
    {
        _reading = reading;
        _files = [new(reading.Study.File, Task.Run(() => Hex(SHA256.HashData(Encoding.UTF8.GetBytes(reading.Text)))))];
    }

    /// <summary>The study, then its files in the order in which they were read.</summary>
    public IReadOnlyList<InputFile> Files => [.. _files.Select(f => new InputFile(f.Name, f.Digest.GetAwaiter().GetResult()))];

    /// <summary>Full path of a file that the study names.</summary>
    public string Locate(string name) => Path.Combine(_reading.Study.Folder, name);

    /// <summary>Notes a file that was read and returns its path and the name for messages.</summary>
    public (string Path, string Display) Use(string name)
    {
        string path = Locate(name);
        if (!Known(name) && File.Exists(path))
        {
            using var stream = new FileStream(path, FileMode.Open, FileAccess.Read, FileShare.Read, 1 << 20, FileOptions.SequentialScan);
            _files.Add(new(name, Task.FromResult(Hex(SHA256.HashData(stream)))));
        }

        return (path, name);
    }

    /// <summary>Reads a file that is digested beside being parsed, without being read twice.</summary>
    /// <param name="name">As the study names it.</param>
    /// <param name="read">Reads the file at a path, with its name for messages, and hands out its bytes before it parses them.</param>
    /// <exception cref="Core.Studies.InputException">As the reader says; the file is not noted then.</exception>
    public T UseOnce<T>(string name, Func<string, string, Action<byte[]>?, T> read)
    {
        string path = Locate(name);
        if (Known(name))
        {
            return read(path, name, null);
        }

        Task<string>? digest = null;
        T result = read(path, name, bytes => digest = Task.Run(() => Hex(SHA256.HashData(bytes))));
        if (digest is not null)
        {
            _files.Add(new(name, digest));
        }

        return result;
    }

    /// <summary>Likewise for a file that may not be named.</summary>
    public (string Path, string Display)? UseIfNamed(string? name) => name is null ? null : Use(name);

    private bool Known(string name) => _files.Exists(f => f.Name == name);

    private static string Hex(byte[] digest) => Convert.ToHexStringLower(digest);

    private sealed record Noted(string Name, Task<string> Digest);
}
