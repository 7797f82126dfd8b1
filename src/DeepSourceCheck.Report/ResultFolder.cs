using System.Text;
using System.Text.Json;

using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Report;

/// <summary>A result folder that is either not there or whole: written beside the target under a temporary name, then renamed.</summary>
/// <remarks>
/// <para>The temporary name is `.NAME.partial-PID-N`. It holds a locked file while its run lives: the system frees that lock when a run is killed, and the
/// next run for the same target removes the folder. A process number alone would not do: numbers are used again.</para>
/// <para>A folder is ours, and may be replaced whole, when it holds nothing but names that the command writes, and
/// for `assess`: assessment.json is JSON whose program.name is this program;
/// for `leadfield`: rows.tsv, points.tsv with a column `region` (which leadfield tables from elsewhere need not have), and eeg.npy or meg.npy in NumPy's format.
/// Anything else at the target is refused, so that no file of the user is ever deleted.</para>
/// </remarks>
public sealed class ResultFolder : IDisposable
{
    private const string LockName = ".running";

    // Between making the folder and its lock, and between dropping the lock and renaming, lie microseconds.
    private static readonly TimeSpan UnlockedGrace = TimeSpan.FromMinutes(1);

    private static readonly HashSet<string> AssessmentNames = ["assessment.json", "regions.csv", "variants.csv", "dipoles.csv", "report.html", "figures", "maps"];
    private static readonly HashSet<string> LeadfieldNames = ["eeg.npy", "meg.npy", "points.tsv", "rows.tsv"];

    // Left by file browsers, without the user's doing.
    private static readonly HashSet<string> IgnoredNames = [".DS_Store", "Thumbs.db", "desktop.ini"];

    private static int _counter;

    private readonly string _target;
    private readonly ResultFolderKind _kind;
    private readonly string _createdParent;
    private FileStream? _running;
    private bool _done;

    private ResultFolder(string target, ResultFolderKind kind, string folder, FileStream running, string createdParent)
    {
        _target = target;
        _kind = kind;
        _running = running;
        _createdParent = createdParent;
        Folder = folder;
        AppDomain.CurrentDomain.ProcessExit += OnExit;
    }

    /// <summary>The temporary folder to write into.</summary>
    public string Folder { get; }

    /// <summary>Where the folder will stand after <see cref="Commit"/>; full path.</summary>
    public string Target => _target;

    /// <summary>Refuses a target that must not be replaced. Changes nothing; call it before anything is computed.</summary>
    /// <exception cref="InputException">The target is a file, or a folder that is not ours.</exception>
    public static void CheckTarget(string path, ResultFolderKind kind)
    {
        string full = Full(path);
        if (Path.GetDirectoryName(full) is null)
        {
            throw Refused(path, "is the root of the file system; results need a folder of their own.");
        }

        if (File.Exists(full))
        {
            throw Refused(path, "is a file; results need a folder. Give another name, or move the file away.");
        }

        for (string? parent = Path.GetDirectoryName(full); parent is not null && !Directory.Exists(parent); parent = Path.GetDirectoryName(parent))
        {
            if (File.Exists(parent))
            {
                throw Refused(path, $"cannot be made: {parent} is a file, not a folder. Give another place.");
            }
        }

        if (Directory.Exists(full) && WhyNotOurs(full, kind) is { } reason)
        {
            throw Refused(path, $"exists and {reason}: it is left as it is. Give a new name, or move that folder away; only a result folder of the same command is replaced.");
        }
    }

    /// <summary>Checks the target, removes what killed runs for the same target left behind, and makes the temporary folder.</summary>
    /// <exception cref="InputException">As for <see cref="CheckTarget"/>, or the folder cannot be made there.</exception>
    public static ResultFolder Create(string path, ResultFolderKind kind)
    {
        CheckTarget(path, kind);
        string full = Full(path);
        string parent = Path.GetDirectoryName(full)!;
        string createdParent = TopmostMissing(parent);
        try
        {
            Directory.CreateDirectory(parent);
            RemoveStale(full);
            string folder = Path.Combine(parent, $".{Path.GetFileName(full)}.partial-{Environment.ProcessId}-{Interlocked.Increment(ref _counter)}");
            Directory.CreateDirectory(folder);
            FileStream running = new(Path.Combine(folder, LockName), FileMode.CreateNew, FileAccess.ReadWrite, FileShare.None);
            return new ResultFolder(full, kind, folder, running, createdParent);
        }
        catch (Exception e) when (e is UnauthorizedAccessException or IOException)
        {
            throw Refused(path, $"cannot be written: {e.Message.TrimEnd('.')}. Give a place where you may write.");
        }
    }

    /// <summary>Puts the folder at its target in one step, in place of an older one of ours.</summary>
    /// <exception cref="InputException">Something that is not ours has appeared at the target meanwhile.</exception>
    public void Commit()
    {
        ObjectDisposedException.ThrowIf(_done, this);
        CheckTarget(_target, _kind);
        Unlock();
        string old = Folder.Replace(".partial-", ".replaced-", StringComparison.Ordinal);
        bool replaces = Directory.Exists(_target);
        if (replaces)
        {
            Directory.Move(_target, old);
        }

        try
        {
            Directory.Move(Folder, _target);
        }
        catch (IOException) when (replaces)
        {
            Directory.Move(old, _target);
            throw;
        }

        Finish();
        if (replaces)
        {
            TryDelete(old);
        }
    }

    /// <summary>Deletes the temporary folder unless it was committed.</summary>
    public void Dispose()
    {
        if (_done)
        {
            return;
        }

        Finish();
        Unlock();
        TryDelete(Folder);
        RemoveEmptyParents();
    }

    /// <summary>Removes temporary folders for <paramref name="target"/> whose runs are dead, and puts back a folder that a run was killed in the middle of replacing.</summary>
    internal static void RemoveStale(string target)
    {
        string parent = Path.GetDirectoryName(target)!;
        string name = Path.GetFileName(target);
        foreach (string old in Directory.GetDirectories(parent, $".{name}.replaced-*").Where(f => IsOurs(f, name, "replaced")))
        {
            if (Directory.Exists(target))
            {
                TryDelete(old);
            }
            else if (DateTime.UtcNow - Directory.GetLastWriteTimeUtc(old) > UnlockedGrace || !Directory.GetDirectories(parent, $".{name}.partial-*").Any(IsAlive))
            {
                Directory.Move(old, target);
            }
        }

        foreach (string folder in Directory.GetDirectories(parent, $".{name}.partial-*").Where(f => IsOurs(f, name, "partial")))
        {
            if (!IsAlive(folder))
            {
                TryDelete(folder);
            }
        }
    }

    // `.NAME.partial-12-3`: nothing but digits and a dash may follow.
    private static bool IsOurs(string folder, string name, string word)
    {
        string rest = Path.GetFileName(folder)[(name.Length + word.Length + 3)..];
        return rest.Length > 0 && rest.All(c => char.IsAsciiDigit(c) || c == '-');
    }

    private static bool IsAlive(string folder)
    {
        string file = Path.Combine(folder, LockName);
        if (!File.Exists(file))
        {
            return DateTime.UtcNow - Directory.GetLastWriteTimeUtc(folder) < UnlockedGrace;
        }

        try
        {
            using FileStream free = new(file, FileMode.Open, FileAccess.ReadWrite, FileShare.None);
            return false;
        }
        catch (Exception e) when (e is IOException or UnauthorizedAccessException)
        {
            return true;
        }
    }

    private static string? WhyNotOurs(string folder, ResultFolderKind kind)
    {
        HashSet<string> known = kind == ResultFolderKind.Assessment ? AssessmentNames : LeadfieldNames;
        List<string> names = [.. Directory.EnumerateFileSystemEntries(folder).Select(p => Path.GetFileName(p)!).Where(n => !IgnoredNames.Contains(n)).Order(StringComparer.Ordinal)];
        bool ours = kind == ResultFolderKind.Assessment ? IsAssessment(folder) : IsLeadfield(folder);
        if (!ours)
        {
            return names.Count == 0 ? "is an empty folder that this program did not write" : "is no result folder of this command";
        }

        return names.FirstOrDefault(n => !known.Contains(n)) is { } foreign ? $"holds {foreign}, which this program did not write" : null;
    }

    private static bool IsAssessment(string folder)
    {
        string file = Path.Combine(folder, "assessment.json");
        if (!File.Exists(file))
        {
            return false;
        }

        try
        {
            using FileStream stream = File.OpenRead(file);
            using JsonDocument json = JsonDocument.Parse(stream);
            return json.RootElement.ValueKind == JsonValueKind.Object
                && json.RootElement.TryGetProperty("program", out JsonElement program) && program.ValueKind == JsonValueKind.Object
                && program.TryGetProperty("name", out JsonElement name) && name.ValueKind == JsonValueKind.String && name.GetString() == ProgramName.Text;
        }
        catch (Exception e) when (e is JsonException or IOException or UnauthorizedAccessException)
        {
            return false;
        }
    }

    private static bool IsLeadfield(string folder)
    {
        string[] arrays = [.. LeadfieldNames.Where(n => n.EndsWith(".npy", StringComparison.Ordinal)).Select(n => Path.Combine(folder, n)).Where(File.Exists)];
        return arrays.Length > 0 && arrays.All(IsNumPy)
            && Columns(Path.Combine(folder, "rows.tsv")) is ["row", "modality", "kind", "unit", ..]
            && Columns(Path.Combine(folder, "points.tsv")) is { } points && points.Contains("region");
    }

    private static bool IsNumPy(string file)
    {
        Span<byte> magic = stackalloc byte[6];
        using FileStream stream = File.OpenRead(file);
        return stream.ReadAtLeast(magic, 6, throwOnEndOfStream: false) == 6 && magic[0] == 0x93 && magic[1..].SequenceEqual("NUMPY"u8);
    }

    private static string[]? Columns(string file) =>
        File.Exists(file) ? File.ReadLines(file, Encoding.UTF8).FirstOrDefault()?.Split('\t') : null;

    private static string Full(string path) => Path.TrimEndingDirectorySeparator(Path.GetFullPath(path));

    private static string TopmostMissing(string folder)
    {
        string missing = "";
        for (string? f = folder; f is not null && !Directory.Exists(f); f = Path.GetDirectoryName(f))
        {
            missing = f;
        }

        return missing;
    }

    private void OnExit(object? sender, EventArgs e) => Dispose();

    private void Finish()
    {
        _done = true;
        AppDomain.CurrentDomain.ProcessExit -= OnExit;
    }

    private void Unlock()
    {
        _running?.Dispose();
        _running = null;
        string file = Path.Combine(Folder, LockName);
        if (File.Exists(file))
        {
            File.Delete(file);
        }
    }

    private void RemoveEmptyParents()
    {
        // Only folders that this run made, and only while they are empty.
        for (string? f = _createdParent.Length > 0 ? Path.GetDirectoryName(_target) : null; f is not null && f.Length >= _createdParent.Length; f = Path.GetDirectoryName(f))
        {
            if (!Directory.Exists(f) || Directory.EnumerateFileSystemEntries(f).Any())
            {
                return;
            }

            Directory.Delete(f);
        }
    }

    private static void TryDelete(string folder)
    {
        try
        {
            if (Directory.Exists(folder))
            {
                Directory.Delete(folder, recursive: true);
            }
        }
        catch (Exception e) when (e is IOException or UnauthorizedAccessException)
        {
            // Another run removes it at the same time, or will at its start: nothing reads it.
        }
    }

    private static InputException Refused(string path, string message) => new(null, null, $"The result folder {path} {message}");
}
