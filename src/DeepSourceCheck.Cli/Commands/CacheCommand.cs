using System.CommandLine;

using DeepSourceCheck.Cli.Output;
using DeepSourceCheck.Files.Leadfields;

namespace DeepSourceCheck.Cli.Commands;

/// <summary>`cache`: what is kept of solved heads of voxels, and how to be rid of it.</summary>
internal static class CacheCommand
{
    public static Command Create(Surroundings surroundings)
    {
        Option<string?> folder = SharedOptions.Cache();
        var clear = new Option<bool>("--clear") { Description = "Remove every entry; other files in the folder stay.", Arity = ArgumentArity.Zero };
        Option<bool> json = SharedOptions.Json();
        var command = new TaughtCommand("cache", "show or clear what is kept of solved heads of voxels")
        {
            About =
            [
                "A head of voxels is solved once for its sensors; the rows are kept in a folder, so that another region, response or protocol on the same head starts in a second. An entry is verified when it is read. Beyond 4 GiB the entries that were used longest ago are removed.",
                "Everything in it can be computed again: clearing it costs time, nothing else.",
            ],
            Examples =
            [
                new("deepsourcecheck cache", "Where it is and how much it holds."),
                new("deepsourcecheck cache --clear", "Remove all of it."),
            ],
        };
        command.Add(folder);
        command.Add(clear);
        command.Add(json);
        command.SetAction(parsed => Run(parsed.GetValue(folder), parsed.GetValue(clear), parsed.GetValue(json), surroundings));
        return command;
    }

    private static int Run(string? folder, bool clear, bool json, Surroundings surroundings)
    {
        var cache = new RowCache(folder ?? RowCache.DefaultFolder());
        (int count, long bytes) = clear ? cache.Clear() : cache.Size();
        if (json)
        {
            JsonOutput.Object(surroundings.Out, writer =>
            {
                writer.WriteString("folder", cache.Folder);
                writer.WriteNumber(clear ? "removed_entries" : "entries", count);
                writer.WriteNumber(clear ? "removed_bytes" : "bytes", bytes);
            });
            return ExitStatus.Done;
        }

        string what = count == 0 ? "nothing" : $"{count} {(count == 1 ? "entry" : "entries")}, {MemorySize.Rough(bytes)}";
        surroundings.Out.WriteLine(clear ? $"{cache.Folder}: removed {what}" : $"{cache.Folder}: holds {what}");
        return ExitStatus.Done;
    }
}
