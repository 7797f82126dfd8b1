using System.CommandLine;

using DeepSourceCheck.Cli.Output;
using DeepSourceCheck.Cli.Pipeline;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Files.Studies;
using DeepSourceCheck.Report;
using DeepSourceCheck.Report.Console;
using DeepSourceCheck.Report.Tables;

namespace DeepSourceCheck.Cli.Commands;

/// <summary>`assess [STUDY]`: the main job, from a study to a folder of results and a summary.</summary>
internal static class AssessCommand
{
    /// <summary>Folder of results where `--out` does not name one.</summary>
    public const string DefaultFolder = "deepsourcecheck-results";

    /// <summary>Parts of the result that may be left out.</summary>
    public static readonly IReadOnlyList<string> Parts = [ReportWriter.Dipoles, ReportWriter.Figures, ReportWriter.Report, "maps"];

    public static Command Create(Surroundings surroundings)
    {
        Argument<string?> study = SharedOptions.OptionalStudy();
        Option<string> outFolder = SharedOptions.Out($"Folder of the results; {DefaultFolder} where it is left out. An earlier result is replaced whole, any other existing folder is refused.", required: false);
        var without = new Option<IReadOnlySet<string>>("--without")
        {
            Description = "Leave parts out: dipoles, figures, report, maps; several with commas. regions.csv and assessment.json are always written.",
            HelpName = "PARTS",
            CustomParser = SharedOptions.Single<IReadOnlySet<string>>("--without", "one or more of " + string.Join(", ", Parts) + ", separated by commas", ReadParts),
        };
        without.CompletionSources.Add([.. Parts]);
        Option<bool> json = SharedOptions.Json();
        Option<long?> memory = SharedOptions.Memory();
        Option<string?> cache = SharedOptions.Cache();
        var command = new TaughtCommand("assess", "say whether the response can be detected, with what, in how many trials")
        {
            About =
            [
                "The main job. Fills each region with dipoles, computes what EEG and MEG see of them, splits the directions, sets the signal against the noise of one trial, and answers for EEG, MEG and both: trials and minutes to the target, whether the session suffices, and the smallest source that it would show.",
                "Prints the answer and writes a folder: report.html (start there), assessment.json, regions.csv, dipoles.csv, figures, and variants.csv where the study lists variants. It is written under a temporary name and renamed at the end, so that it is whole or absent.",
            ],
            Examples =
            [
                new("deepsourcecheck assess", $"The embedded default study, into {DefaultFolder}."),
                new("deepsourcecheck assess my-study/study.yaml --out my-study/results", "Your own study."),
                new("deepsourcecheck assess my-study/study.yaml --without dipoles,figures --json", "For scripts: no large files, and the answer as JSON on standard output."),
            ],
        };
        command.Add(study);
        command.Add(outFolder);
        command.Add(without);
        command.Add(json);
        command.Add(memory);
        command.Add(cache);
        command.SetAction(parsed => Run(
            parsed.GetValue(study), parsed.GetValue(outFolder) ?? DefaultFolder, parsed.GetValue(without) ?? new HashSet<string>(), parsed.GetValue(json), parsed.GetValue(memory), parsed.GetValue(cache), surroundings));
        return command;
    }

    private static int Run(string? study, string outFolder, IReadOnlySet<string> without, bool json, long? memory, string? cache, Surroundings surroundings)
    {
        CancellationToken cancellation = surroundings.Interruption.Token;
        string? path = SharedOptions.Checked(study);
        ResultFolder.CheckTarget(outFolder, ResultFolderKind.Assessment);
        Assessment assessment;
        int files;
        using (ProgressLine? line = surroundings.ErrorIsTerminal ? new ProgressLine(surroundings.Error, surroundings.Columns) : null)
        {
            var settings = new RunSettings(memory, without, line is null ? null : line.Report, cancellation) { CacheFolder = cache };
            PreparedStudy prepared = surroundings.Steps.Prepare(path, Purpose.Assess, settings);
            using ResultFolder folder = ResultFolder.Create(outFolder, ResultFolderKind.Assessment);
            using IDisposable guard = surroundings.Interruption.Guard(() => Discard.Whole(folder));
            assessment = Assess(prepared, settings, folder.Folder, surroundings);
            line?.Report("writing", 0);
            files = ReportWriter.Write(assessment, folder.Folder, without, cancellation) + (without.Contains(ReportWriter.Dipoles) ? 0 : 1);
            cancellation.ThrowIfCancellationRequested();
            folder.Commit();
        }

        if (json)
        {
            using var bytes = new MemoryStream();
            AssessmentJson.Write(assessment, bytes);
            JsonOutput.Bytes(surroundings.Out, bytes);
        }
        else
        {
            // A terminal shows both streams, and the summary carries the warnings: once is enough there.
            if (!surroundings.OutIsTerminal)
            {
                surroundings.Warn(assessment.Warnings);
            }

            surroundings.Out.Write(ConsoleSummary.Of(
                assessment, outFolder, surroundings.OutIsTerminal, surroundings.Unicode, surroundings.Color, files, !without.Contains(ReportWriter.Report)));
        }

        return ExitStatus.Done;
    }

    private static Assessment Assess(PreparedStudy prepared, RunSettings settings, string folder, Surroundings surroundings)
    {
        if (settings.Without.Contains(ReportWriter.Dipoles))
        {
            return surroundings.Steps.Assess(prepared, settings, null);
        }

        var stream = new FileStream(Path.Combine(folder, "dipoles.csv"), FileMode.CreateNew, FileAccess.Write, FileShare.Read, 1 << 20);
        using var dipoles = new DipolesCsv(stream);
        return surroundings.Steps.Assess(prepared, settings, dipoles);
    }

    private static HashSet<string>? ReadParts(string text)
    {
        string[] parts = text.Split(',', StringSplitOptions.TrimEntries);
        return parts.All(Parts.Contains) ? [.. parts] : null;
    }
}
