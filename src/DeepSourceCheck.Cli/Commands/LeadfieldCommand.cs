using System.CommandLine;
using System.Globalization;

using DeepSourceCheck.Cli.Output;
using DeepSourceCheck.Cli.Pipeline;
using DeepSourceCheck.Files.Studies;
using DeepSourceCheck.Report;
using DeepSourceCheck.Report.Tables;

namespace DeepSourceCheck.Cli.Commands;

/// <summary>`leadfield STUDY --out FOLDER`: the leadfields as arrays, for use elsewhere.</summary>
internal static class LeadfieldCommand
{
    public static Command Create(Surroundings surroundings)
    {
        var study = new Argument<string>("STUDY") { Description = "The study file (YAML); responses, noise, target and protocol are not needed." };
        Option<string> outFolder = SharedOptions.Out("Folder of the arrays. An earlier result is replaced whole, any other existing folder is refused.", required: true);
        Option<bool> json = SharedOptions.Json();
        Option<long?> memory = SharedOptions.Memory();
        Option<string?> cache = SharedOptions.Cache();
        var command = new TaughtCommand("leadfield", "write what EEG and MEG see of each dipole, as arrays")
        {
            About =
            [
                "Writes eeg.npy in V/(A m), with the study's reference, and meg.npy in T/(A m) (planar gradiometers T/m/(A m)): float64, channels x points x 3, SI units; points.tsv (the region and place of each point) and rows.tsv (the channels in the arrays' order). A modality without sensors is not written.",
                "The points are those of every region listed in the study, then of every library region that a response names. A point that the head refuses keeps its row, with the reason, and is NaN in the arrays.",
            ],
            Examples = [new("deepsourcecheck leadfield my-study/study.yaml --out my-study/leadfields", "Arrays for NumPy, or for a later study through head.leadfields.")],
        };
        command.Add(study);
        command.Add(outFolder);
        command.Add(json);
        command.Add(memory);
        command.Add(cache);
        command.SetAction(parsed => Run(parsed.GetRequiredValue(study), parsed.GetRequiredValue(outFolder), parsed.GetValue(json), parsed.GetValue(memory), parsed.GetValue(cache), surroundings));
        return command;
    }

    private static int Run(string study, string outFolder, bool json, long? memory, string? cache, Surroundings surroundings)
    {
        CancellationToken cancellation = surroundings.Interruption.Token;
        string? path = SharedOptions.Checked(study);
        ResultFolder.CheckTarget(outFolder, ResultFolderKind.Leadfield);
        PreparedStudy prepared;
        string[] files;
        using (ProgressLine? line = surroundings.ErrorIsTerminal ? new ProgressLine(surroundings.Error, surroundings.Columns) : null)
        {
            var settings = new RunSettings(memory, new HashSet<string>(), line is null ? null : line.Report, cancellation) { CacheFolder = cache };
            prepared = surroundings.Steps.Prepare(path, Purpose.Leadfield, settings);
            using ResultFolder folder = ResultFolder.Create(outFolder, ResultFolderKind.Leadfield);
            using IDisposable guard = surroundings.Interruption.Guard(() => Discard.Whole(folder));
            surroundings.Steps.WriteLeadfield(prepared, folder.Folder, settings);
            files = [.. Directory.EnumerateFiles(folder.Folder).Select(f => Path.GetFileName(f)).Where(f => !f.StartsWith('.')).Order(StringComparer.Ordinal)];
            cancellation.ThrowIfCancellationRequested();
            folder.Commit();
        }

        if (json)
        {
            JsonOutput.Object(surroundings.Out, writer =>
            {
                writer.WriteString("folder", outFolder);
                writer.WriteStrings("files", files);
                writer.WriteNumber("electrodes", prepared.Electrodes);
                writer.WriteNumber("meg_channels", prepared.MegChannels);
                writer.WriteNumber("dipoles", prepared.Dipoles);
                writer.WriteStrings("warnings", prepared.Warnings);
            });
        }
        else
        {
            surroundings.Warn(prepared.Warnings);
            surroundings.Out.WriteLine(string.Create(CultureInfo.InvariantCulture,
                $"{prepared.Dipoles:#,0} dipoles, {prepared.Electrodes:#,0} electrodes, {prepared.MegChannels:#,0} MEG channels"));
            surroundings.Out.WriteLine($"Written: {outFolder} ({string.Join(", ", files)})");
        }

        return ExitStatus.Done;
    }
}
