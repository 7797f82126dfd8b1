using System.CommandLine;

using DeepSourceCheck.Cli.Output;
using DeepSourceCheck.Cli.Pipeline;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Files.Studies;
using DeepSourceCheck.Report.Console;
using DeepSourceCheck.Report.Tables;

namespace DeepSourceCheck.Cli.Commands;

/// <summary>`why [STUDY] [REGION]`: every number from moment to minutes, from the values that the run used.</summary>
internal static class WhyCommand
{
    public static Command Create(Surroundings surroundings)
    {
        Argument<string?> study = SharedOptions.OptionalStudy();
        var region = new Argument<string?>("REGION")
        {
            Description = "A region of the study. Left out: the first region of the first response. A region alone, without STUDY, asks the default study.",
            Arity = ArgumentArity.ZeroOrOne,
        };
        Option<bool> json = SharedOptions.Json();
        Option<long?> memory = SharedOptions.Memory();
        Option<string?> cache = SharedOptions.Cache();
        var command = new TaughtCommand("why", "the whole chain for one region: each number with its formula and source")
        {
            About =
            [
                "Runs the study and prints, for one region, each number from the moment to the minutes: value, unit, formula and where it comes from. The values are those that the run used: whoever recomputes the printed lines gets the number of trials exactly.",
                "The lines stand for the dipole at the median of the region. For a region of the library, what a realistic head was measured to change against spheres follows. Nothing is written.",
            ],
            Examples =
            [
                new("deepsourcecheck why", "The first region of the default study."),
                new("deepsourcecheck why my-study/study.yaml thalamus-left", "One region of your own study."),
            ],
        };
        command.Add(study);
        command.Add(region);
        command.Add(json);
        command.Add(memory);
        command.Add(cache);
        command.SetAction(parsed => Run(parsed.GetValue(study), parsed.GetValue(region), parsed.GetValue(json), parsed.GetValue(memory), parsed.GetValue(cache), surroundings));
        return command;
    }

    private static int Run(string? study, string? region, bool json, long? memory, string? cache, Surroundings surroundings)
    {
        if (study is not null && region is null && LooksLikeRegion(study))
        {
            (study, region) = (null, study);
        }

        string? path = SharedOptions.Checked(study);
        Assessment assessment;
        using (ProgressLine? line = surroundings.ErrorIsTerminal ? new ProgressLine(surroundings.Error, surroundings.Columns) : null)
        {
            var settings = new RunSettings(memory, AssessCommand.Parts.ToHashSet(), line is null ? null : line.Report, surroundings.Interruption.Token) { CacheFolder = cache };
            PreparedStudy prepared = surroundings.Steps.Prepare(path, Purpose.Assess, settings);
            assessment = surroundings.Steps.Assess(prepared, settings, null);
        }

        (ResponseResult Response, RegionResult Region)[] chosen = Choose(assessment, region);
        if (json)
        {
            WriteJson(assessment, chosen, surroundings);
            return ExitStatus.Done;
        }

        bool unicode = surroundings.OutIsTerminal && surroundings.Unicode;
        surroundings.Warn(assessment.Warnings);
        for (int i = 0; i < chosen.Length; i++)
        {
            if (i > 0)
            {
                surroundings.Out.WriteLine();
            }

            surroundings.Out.Write(WhyText.Of(assessment, chosen[i].Response, chosen[i].Region, unicode));
        }

        // Once, however many responses the region has: it does not depend on them.
        surroundings.Out.Write(RealisticHeadText.Of(assessment, chosen[0].Region, unicode));

        return ExitStatus.Done;
    }

    /// <summary>A single argument that is no file and has no mark of a path is taken as a region of the default study.</summary>
    private static bool LooksLikeRegion(string argument) =>
        !Path.Exists(argument) && !argument.Contains('/', StringComparison.Ordinal) && !argument.Contains('\\', StringComparison.Ordinal)
        && !argument.EndsWith(".yaml", StringComparison.OrdinalIgnoreCase) && !argument.EndsWith(".yml", StringComparison.OrdinalIgnoreCase);

    /// <summary>The region under every response that has it; the first of the first response where none is named.</summary>
    private static (ResponseResult Response, RegionResult Region)[] Choose(Assessment assessment, string? region)
    {
        (ResponseResult Response, RegionResult Region)[] all = [.. assessment.Responses.SelectMany(response => response.Regions, (response, result) => (response, result))];
        if (region is null)
        {
            return all[..1];
        }

        (ResponseResult Response, RegionResult Region)[] chosen = [.. all.Where(pair => pair.Region.Region == region)];
        return chosen.Length > 0
            ? chosen
            : throw new InputException(assessment.Study.File, "REGION",
                $"no response has the region '{region}'; there are {string.Join(", ", all.Select(pair => pair.Region.Region).Distinct())}");
    }

    private static void WriteJson(Assessment assessment, (ResponseResult Response, RegionResult Region)[] chosen, Surroundings surroundings) => JsonOutput.Object(surroundings.Out, json =>
    {
        json.WriteString("study", assessment.Study.File);
        json.WriteStartArray("chains");
        foreach ((ResponseResult response, RegionResult region) in chosen)
        {
            foreach (VerdictResult verdict in region.Verdicts)
            {
                json.WriteStartObject();
                json.WriteString("response", response.Response.Name);
                json.WriteString("region", region.Region);
                json.WriteVerdictMembers(verdict);
                json.WriteArray("numbers", verdict.Chain, JsonText.WriteDerivedNumber);
                json.WriteEndObject();
            }
        }

        json.WriteEndArray();
        json.WriteRealisticHeads(chosen.SelectMany(pair => pair.Region.RealisticHeads).Distinct());
        json.WriteStrings("warnings", assessment.Warnings);
    });
}
