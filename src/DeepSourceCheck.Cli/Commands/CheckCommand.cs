using System.CommandLine;
using System.Globalization;

using DeepSourceCheck.Cli.Output;
using DeepSourceCheck.Cli.Pipeline;
using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Files.Studies;
using DeepSourceCheck.Report.Console;
using DeepSourceCheck.Report.Tables;

namespace DeepSourceCheck.Cli.Commands;

/// <summary>`check [STUDY]`: validates everything, computes nothing, prints what would run.</summary>
internal static class CheckCommand
{
    public static Command Create(Surroundings surroundings)
    {
        Argument<string?> study = SharedOptions.OptionalStudy();
        Option<bool> json = SharedOptions.Json();
        Option<long?> memory = SharedOptions.Memory();
        var command = new TaughtCommand("check", "validate a study and print what would run, without computing")
        {
            About =
            [
                "Reads the study and every file that it names, reports all problems at once with file, line, column and key, and warns of implausible values. Of a sound study it prints head, channels, regions, dipoles, every default that would enter the answer, and the time and memory that `assess` would take.",
                "Nothing is computed and nothing is written.",
            ],
            Examples =
            [
                new("deepsourcecheck check my-study/study.yaml", "Find mistakes before a long run."),
                new("deepsourcecheck check my-study/study.yaml --memory 4GB", "Also ask whether it fits into 4 GB: exit status 2 where it does not."),
            ],
        };
        command.Add(study);
        command.Add(json);
        command.Add(memory);
        command.SetAction(parsed => Run(parsed.GetValue(study), parsed.GetValue(json), parsed.GetValue(memory), surroundings));
        return command;
    }

    private static int Run(string? study, bool json, long? memory, Surroundings surroundings)
    {
        var settings = new RunSettings(memory, new HashSet<string>(), null, surroundings.Interruption.Token) { CheckOnly = true };
        string? path = SharedOptions.Checked(study);
        PreparedStudy prepared = Prepare(path, settings, surroundings);
        if (json)
        {
            WriteJson(prepared, surroundings);
        }
        else
        {
            surroundings.Warn(prepared.Warnings);
            WriteText(prepared, surroundings.Out);
        }

        return ExitStatus.Done;
    }

    /// <summary>A study without responses serves `leadfield` alone, and is checked for that. Others are read once.</summary>
    private static PreparedStudy Prepare(string? path, RunSettings settings, Surroundings surroundings)
    {
        try
        {
            return surroundings.Steps.Prepare(path, Purpose.Assess, settings);
        }
        catch (InputException e) when (e.Problems.Any(p => p.Key == "responses"))
        {
            PreparedStudy prepared = surroundings.Steps.Prepare(path, Purpose.Leadfield, settings);
            if (prepared.Study.Responses.Count > 0)
            {
                throw;
            }

            return prepared;
        }
    }

    private static void WriteText(PreparedStudy prepared, TextWriter to)
    {
        Study study = prepared.Study;
        void Row(string name, string value) => to.WriteLine($"{name,-12}{value}");
        to.WriteLine(Failure.OneLine(study.Title));
        Row("study", study.File);
        Row("head", HeadName(prepared));
        Row("channels", string.Create(CultureInfo.InvariantCulture, $"{prepared.Electrodes:#,0} electrodes, {prepared.MegChannels:#,0} MEG channels"));
        if (prepared.Setup.ArrayPlace is { } place)
        {
            Row("MEG array", place);
        }

        Row("dipoles", string.Create(CultureInfo.InvariantCulture, $"{prepared.Dipoles:#,0} in {prepared.Regions.Count} region{(prepared.Regions.Count == 1 ? "" : "s")}"));
        int width = prepared.Regions.Select(r => r.Region.Length).DefaultIfEmpty().Max();
        foreach ((string region, long dipoles, double? spacing) in prepared.Regions)
        {
            string apart = spacing is { } mm ? string.Create(CultureInfo.InvariantCulture, $", {mm:0.###} mm apart") : "";
            Row("", string.Create(CultureInfo.InvariantCulture, $"{region.PadRight(width)}  {dipoles,9:#,0}{apart}"));
        }

        Row("responses", study.Responses.Count > 0 ? string.Join(", ", study.Responses.Select(r => r.Name)) : "none: this study serves `leadfield` alone");
        if (prepared.Variants.Count > 0)
        {
            Row("variants", string.Join(", ", prepared.Variants.Select(v => v.Name)));
        }

        Row("takes about", $"{Durations.Rough(prepared.PredictedSeconds)}, {MemorySize.Rough(prepared.PredictedMemory)}");
        Assumption[] defaults = [.. prepared.Reading.Assumptions.Where(a => !a.FromStudy)];
        if (defaults.Length > 0)
        {
            to.WriteLine();
            to.WriteLine("Not stated by the study, so these defaults enter:");
            foreach (Assumption assumption in defaults)
            {
                to.Write(WhyText.Wrap(Failure.OneLine(AssumptionText.Line(assumption)), 2));
            }
        }

        if (prepared.Found.Count > 0)
        {
            to.WriteLine();
            to.WriteLine("Read off the recording:");
            foreach (Assumption assumption in prepared.Found)
            {
                to.Write(WhyText.Wrap(Failure.OneLine(AssumptionText.Line(assumption)), 2));
            }
        }

        to.WriteLine();
        to.WriteLine("The study is sound. Nothing was computed or written.");
    }

    private static void WriteJson(PreparedStudy prepared, Surroundings surroundings) => JsonOutput.Object(surroundings.Out, json =>
    {
        json.WriteString("study", prepared.Study.File);
        json.WriteString("title", prepared.Study.Title);
        json.WriteString("head", HeadName(prepared));
        json.WriteNumber("electrodes", prepared.Electrodes);
        json.WriteNumber("meg_channels", prepared.MegChannels);
        json.WriteString("meg_array", prepared.Setup.ArrayPlace);
        json.WriteNumber("dipoles", prepared.Dipoles);
        json.WriteStartArray("regions");
        foreach ((string region, long dipoles, double? spacing) in prepared.Regions)
        {
            json.WriteStartObject();
            json.WriteString("region", region);
            json.WriteNumber("dipoles", dipoles);
            json.WriteFigure("spacing_mm", spacing);
            json.WriteEndObject();
        }

        json.WriteEndArray();
        json.WriteStrings("responses", prepared.Study.Responses.Select(r => r.Name));
        json.WriteStrings("variants", prepared.Variants.Select(v => v.Name));
        json.WriteNumber("predicted_memory_bytes", prepared.PredictedMemory);
        json.WriteFigure("predicted_seconds", prepared.PredictedSeconds);
        json.WriteArray("assumptions", prepared.Assumptions, JsonText.WriteAssumption);
        json.WriteStrings("warnings", prepared.Warnings);
    });

    private static string HeadName(PreparedStudy prepared) => prepared.Study.Head switch
    {
        SphereHeadChoice { Preset: { } preset, Sphere: var sphere } => $"spheres: {preset}, {Layers(sphere)}",
        SphereHeadChoice { Sphere: var sphere } => $"spheres: {Layers(sphere)}",
        VoxelHeadChoice voxels => Voxels(voxels, prepared.Setup.Head as VoxelHead),
        _ => new ImportedHead().Name,
    };

    /// <summary>File, elements, voxel size and tissues.</summary>
    private static string Voxels(VoxelHeadChoice choice, VoxelHead? head)
    {
        string tissues = string.Join(", ", choice.Tissues.Where(t => t.Kind != TissueKind.Air).Select(t => t.Name).Distinct());
        if (head is null)
        {
            return $"voxels: {choice.Labels}, {tissues}";
        }

        VoxelGrid grid = head.Volume.Grid;
        int elements = grid.Count - head.Volume.Cells.Count((byte)0);
        string[] edges = [.. Enumerable.Range(0, 3).Select(axis => string.Create(CultureInfo.InvariantCulture, $"{Core.Units.Si.ToMm(grid.ToWorld.Column(axis).Norm):0.##}"))];
        string size = edges.Distinct().Count() == 1 ? edges[0] : string.Join(" x ", edges);
        return string.Create(CultureInfo.InvariantCulture, $"voxels: {choice.Labels}, {elements:#,0} elements of {size} mm, {tissues}");
    }

    private static string Layers(LayeredSphere sphere) =>
        string.Join(", ", sphere.Layers.Select(l => string.Create(CultureInfo.InvariantCulture, $"{l.Tissue} {Core.Units.Si.ToMm(l.OuterRadius):0.##} mm")));
}
