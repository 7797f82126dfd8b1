using System.CommandLine;
using System.Text;

using DeepSourceCheck.Cli.Output;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Files.Studies;
using DeepSourceCheck.Report.Tables;

namespace DeepSourceCheck.Cli.Commands;

/// <summary>`new FOLDER`: writes a commented example study that runs as it is.</summary>
internal static class NewCommand
{
    private const string FileName = "study.yaml";

    public static Command Create(Surroundings surroundings)
    {
        var folder = new Argument<string>("FOLDER") { Description = "Folder that receives study.yaml; made where it does not exist." };
        var head = new Option<string?>("--head")
        {
            Description = "KIND phantom, an invented label volume, comes with the voxel head and is not supported yet.",
            HelpName = "KIND",
            CustomParser = result =>
            {
                string kind = result.Tokens.Count > 0 ? result.Tokens[0].Value : "";
                result.AddError(kind == "phantom"
                    ? "--head phantom is not supported yet; without --head the example has a spherical head."
                    : $"--head takes phantom (not supported yet), not '{kind}'; without --head the example has a spherical head.");
                return null;
            },
        };
        Option<bool> json = SharedOptions.Json();
        var command = new TaughtCommand("new", "write a commented example study that runs as it is")
        {
            About =
            [
                "Writes FOLDER/study.yaml: the default study with a comment beside every key. Change it line by line and run `check` after each change; every error names the line and what is allowed there.",
                "A study.yaml that is there already is never overwritten.",
            ],
            Examples = [new("deepsourcecheck new my-study", "Write my-study/study.yaml; then `deepsourcecheck assess my-study/study.yaml` runs it.")],
        };
        command.Add(folder);
        command.Add(head);
        command.Add(json);
        command.SetAction(parsed => Run(parsed.GetRequiredValue(folder), parsed.GetValue(json), surroundings));
        return command;
    }

    private static int Run(string folder, bool json, Surroundings surroundings)
    {
        string path = Path.Combine(folder, FileName);
        if (folder.Trim().Length == 0)
        {
            throw new InputException(null, "FOLDER", "the name of the folder is empty");
        }

        if (File.Exists(folder))
        {
            throw new InputException(folder, null, "this is a file; name a folder, or a new name");
        }

        if (Path.Exists(path))
        {
            throw new InputException(path, null, "this study exists already and is left as it is; name another folder, or remove the file first");
        }

        bool madeFolder = !Directory.Exists(folder);
        Directory.CreateDirectory(folder);
        Write(path, madeFolder ? folder : null, surroundings);
        if (json)
        {
            JsonOutput.Object(surroundings.Out, writer => writer.WriteStrings("written", [path]));
        }
        else
        {
            surroundings.Out.WriteLine($"Written: {path}");
            surroundings.Out.WriteLine($"Next:    {CommandLine.ProgramName} check {path}");
            surroundings.Out.WriteLine($"         {CommandLine.ProgramName} assess {path}");
        }

        return ExitStatus.Done;
    }

    /// <summary>Writes the study whole or not at all.</summary>
    private static void Write(string path, string? madeFolder, Surroundings surroundings)
    {
        string temporary = $"{path}.{Environment.ProcessId}.part";
        void Remove()
        {
            File.Delete(temporary);
            if (madeFolder is not null && Directory.Exists(madeFolder) && !Directory.EnumerateFileSystemEntries(madeFolder).Any())
            {
                Directory.Delete(madeFolder);
            }
        }

        using IDisposable guard = surroundings.Interruption.Guard(Remove);
        try
        {
            surroundings.Interruption.Token.ThrowIfCancellationRequested();
            File.WriteAllText(temporary, ExampleStudy.Text, new UTF8Encoding(false));
            File.Move(temporary, path, overwrite: false);
        }
        catch
        {
            Remove();
            throw;
        }
    }
}
