namespace DeepSourceCheck.Cli.Output;

/// <summary>Puts new files into a folder, all or none: they are written into a temporary folder beside their place, then renamed. Nothing that exists is replaced.</summary>
internal static class NewFiles
{
    /// <summary>Writes files.</summary>
    /// <param name="folder">Where they go; made where it does not exist.</param>
    /// <param name="names">Their names.</param>
    /// <param name="write">Writes all of them into the folder that it is given.</param>
    /// <param name="interruption">Ends the work and leaves nothing.</param>
    public static void Write(string folder, IReadOnlyList<string> names, Action<string> write, Interruption interruption)
    {
        bool made = !Directory.Exists(folder);
        string temporary = Path.Combine(folder, $".new-{Environment.ProcessId}.part");
        var gate = new Lock();
        List<string> placed = [];
        bool done = false;
        void Remove()
        {
            lock (gate)
            {
                if (done)
                {
                    return;
                }

                if (Directory.Exists(temporary))
                {
                    Directory.Delete(temporary, recursive: true);
                }

                placed.ForEach(File.Delete);
                placed.Clear();
                if (made && Directory.Exists(folder) && !Directory.EnumerateFileSystemEntries(folder).Any())
                {
                    Directory.Delete(folder);
                }
            }
        }

        using IDisposable guard = interruption.Guard(Remove);
        try
        {
            interruption.Token.ThrowIfCancellationRequested();
            Directory.CreateDirectory(temporary);
            write(temporary);
            interruption.Token.ThrowIfCancellationRequested();
            lock (gate)
            {
                foreach (string name in names)
                {
                    string place = Path.Combine(folder, name);
                    File.Move(Path.Combine(temporary, name), place, overwrite: false);
                    placed.Add(place);
                }

                Directory.Delete(temporary);
                done = true;
            }
        }
        catch
        {
            Remove();
            throw;
        }
    }
}
