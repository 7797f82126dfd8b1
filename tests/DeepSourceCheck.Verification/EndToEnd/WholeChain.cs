using DeepSourceCheck.Cli.Pipeline;
using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Files.Studies;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Verification.EndToEnd;

/// <summary>A study as a user writes it, through the whole pipeline in this process.</summary>
internal sealed class WholeChain
{
    /// <summary>The contract's adult head.</summary>
    public const string Adult = "head: {spheres: {preset: adult-4}}\n";

    private WholeChain(PreparedStudy prepared, Assessment assessment)
    {
        Prepared = prepared;
        Assessment = assessment;
    }

    public PreparedStudy Prepared { get; }

    public Assessment Assessment { get; }

    /// <summary>The default study with its text changed; every change must hit.</summary>
    public static WholeChain Default(params (string From, string To)[] changes) => Run(Changed(DefaultStudy.Text, changes));

    /// <summary>Runs a study; files stand beside it.</summary>
    public static WholeChain Run(string study, params (string Name, string Text)[] files)
    {
        using ScratchFolder folder = new();
        foreach ((string name, string text) in files)
        {
            folder.Write(name, text);
        }

        return RunFile(folder.Write("study.yaml", study));
    }

    /// <summary>Runs a study file.</summary>
    public static WholeChain RunFile(string path)
    {
        PreparedStudy prepared = StudyPipeline.Prepare(path, Purpose.Assess, Settings);
        return new(prepared, StudyPipeline.Assess(prepared, Settings, null));
    }

    public static RunSettings Settings { get; } = new(null, new HashSet<string>(), null, CancellationToken.None);

    /// <summary>A table of points [mm].</summary>
    public static (string Name, string Text) Points(string file, params (string Name, Vec3 Mm)[] points) =>
        (file, "name\tx\ty\tz\n" + string.Concat(points.Select(p => FormattableString.Invariant($"{p.Name}\t{p.Mm.X:R}\t{p.Mm.Y:R}\t{p.Mm.Z:R}\n"))));

    public static string Changed(string text, params (string From, string To)[] changes)
    {
        foreach ((string from, string to) in changes)
        {
            Assert.Contains(from, text, StringComparison.Ordinal);
            text = text.Replace(from, to, StringComparison.Ordinal);
        }

        return text;
    }

    public RegionResult Region(int response = 0, int region = 0) => Assessment.Responses[response].Regions[region];

    public MeasureResult Row(Modality modality, DirectionName direction, string measure, int response = 0, int region = 0) =>
        Region(response, region).Find(modality, direction, measure) ?? throw new InvalidOperationException($"no row {modality} {direction} {measure}");

    /// <summary>Median SNR of one trial [dB].</summary>
    public double Db(Modality modality, DirectionName direction, string measure, int response = 0, int region = 0) =>
        Row(modality, direction, measure, response, region).SnrDb.P50 ?? throw new InvalidOperationException($"{modality} {direction} {measure} is silent");

    /// <summary>Median count under the first rule.</summary>
    public long Trials(Modality modality, DirectionName direction, string measure, int response = 0, int region = 0) =>
        Row(modality, direction, measure, response, region).Targets[0].Trials.P50 ?? throw new InvalidOperationException($"{modality} {direction} {measure} is out of reach");

    /// <summary>Median peak, in the unit of the result.</summary>
    public double Peak(Modality modality, DirectionName direction, string measure, int response = 0, int region = 0) =>
        Row(modality, direction, measure, response, region).Peak!.Value;
}
