using System.CommandLine;
using System.Globalization;
using System.Text;

using DeepSourceCheck.Cli.Output;
using DeepSourceCheck.Core.Heads.Voxels.Phantom;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Files.Studies;
using DeepSourceCheck.Report.Tables;

namespace DeepSourceCheck.Cli.Commands;

/// <summary>`new FOLDER`: writes a commented example study that runs as it is; with `--head phantom` also an invented label volume and its regions.</summary>
internal static class NewCommand
{
    private const string FileName = "study.yaml";

    // Voxel edges [mm] that are drawn where none is stated.
    private const double AdultVoxel = 2;
    private const double NeonateVoxel = 1;

    public static Command Create(Surroundings surroundings)
    {
        var folder = new Argument<string>("FOLDER") { Description = "Folder that receives study.yaml; made where it does not exist." };
        var head = new Option<PhantomKind?>("--head")
        {
            Description = "KIND phantom: a study on an invented adult head, written as a label volume with regions that fit it; neonate-phantom: the same scaled to a newborn. Without --head: a spherical head.",
            HelpName = "KIND",
            CustomParser = SharedOptions.Single<PhantomKind?>("--head", "phantom or neonate-phantom", text => text switch
            {
                "phantom" => PhantomKind.Adult,
                "neonate-phantom" => PhantomKind.Neonate,
                _ => null,
            }),
        };
        var voxel = new Option<double?>("--voxel-mm")
        {
            Description = "Edge of the phantom's voxels, 1 to 3 mm. Without it 2 mm, for neonate-phantom 1 mm.",
            HelpName = "MM",
            CustomParser = SharedOptions.Single<double?>("--voxel-mm", "a number from 1 to 3", text =>
                double.TryParse(text, NumberStyles.AllowDecimalPoint, CultureInfo.InvariantCulture, out double mm) && mm is >= 1 and <= 3 ? mm : null),
        };
        Option<bool> json = SharedOptions.Json();
        var command = new TaughtCommand("new", "write a commented example study that runs as it is")
        {
            About =
            [
                "Writes FOLDER/study.yaml: the default study with a comment beside every key. Change it line by line and run `check` after each change; every error names the line and what is allowed there.",
                "With --head phantom the study stands on an invented head, and phantom-head.nii.gz (tissues), phantom-regions.nii.gz (regions) and phantom-regions.tsv (their names) are written beside it. No person was measured: use it to try the program and to compare models, never to plan treatment.",
                "Files that are there already are never overwritten.",
            ],
            Examples =
            [
                new("deepsourcecheck new my-study", "Write my-study/study.yaml; then `deepsourcecheck assess my-study/study.yaml` runs it."),
                new("deepsourcecheck new my-head --head phantom --voxel-mm 1", "Write a study on an invented head with voxels of 1 mm."),
            ],
        };
        command.Add(folder);
        command.Add(head);
        command.Add(voxel);
        command.Add(json);
        command.SetAction(parsed => Run(parsed.GetRequiredValue(folder), parsed.GetValue(head), parsed.GetValue(voxel), parsed.GetValue(json), surroundings));
        return command;
    }

    private static int Run(string folder, PhantomKind? head, double? voxel, bool json, Surroundings surroundings)
    {
        string[] names = head is null ? [FileName] : [FileName, PhantomStudy.HeadFile, PhantomStudy.RegionsFile, PhantomStudy.ListingFile];
        Refuse(folder, names);
        if (head is null && voxel is not null)
        {
            throw new InputException(null, "--voxel-mm", "only the phantom has voxels; add --head phantom");
        }

        IReadOnlyList<string> warnings = [];
        NewFiles.Write(folder, names, temporary =>
        {
            string text = ExampleStudy.Text;
            if (head is { } kind)
            {
                double edge = (voxel ?? (kind == PhantomKind.Neonate ? NeonateVoxel : AdultVoxel)) / 1000;
                PhantomHead phantom = PhantomHead.Generate(kind, edge, cancellation: surroundings.Interruption.Token);
                PhantomStudy.WriteFiles(phantom, temporary);
                (text, warnings) = (PhantomStudy.Text(phantom), phantom.Warnings);
            }

            File.WriteAllText(Path.Combine(temporary, FileName), text, new UTF8Encoding(false));
        }, surroundings.Interruption);
        Report(folder, names, json, surroundings);
        surroundings.Warn(warnings);
        return ExitStatus.Done;
    }

    /// <summary>Refuses what would touch anything that exists.</summary>
    private static void Refuse(string folder, string[] names)
    {
        if (folder.Trim().Length == 0)
        {
            throw new InputException(null, "FOLDER", "the name of the folder is empty");
        }

        if (File.Exists(folder))
        {
            throw new InputException(folder, null, "this is a file; name a folder, or a new name");
        }

        foreach (string path in names.Select(name => Path.Combine(folder, name)).Where(Path.Exists))
        {
            throw new InputException(path, null, "this file exists already and is left as it is; name another folder, or remove the file first");
        }
    }

    private static void Report(string folder, string[] names, bool json, Surroundings surroundings)
    {
        string[] paths = [.. names.Select(name => Path.Combine(folder, name))];
        if (json)
        {
            JsonOutput.Object(surroundings.Out, writer => writer.WriteStrings("written", paths));
            return;
        }

        foreach (string path in paths)
        {
            surroundings.Out.WriteLine($"Written: {path}");
        }

        surroundings.Out.WriteLine($"Next:    {CommandLine.ProgramName} check {paths[0]}");
        surroundings.Out.WriteLine($"         {CommandLine.ProgramName} assess {paths[0]}");
    }
}
