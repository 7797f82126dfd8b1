using System.Globalization;

using DeepSourceCheck.Cli.Pipeline;
using DeepSourceCheck.Core.Heads.Voxels.Phantom;
using DeepSourceCheck.Core.Regions;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Files.Regions;
using DeepSourceCheck.Files.Studies;
using DeepSourceCheck.Report.Answers;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Verification.EndToEnd;

/// <summary>The figures of a realistic head that travel with the library, some of them measured again: the numbered study with a few regions, the spheres as its one variant.</summary>
public class RealisticHeadTableTests
{
    // The table has one decimal of a decibel: half of it, and 0.02 dB for what remains of the solver's residual (1e-5 of a field is 1e-4 dB) and of medians that fall between two dipoles on another machine.
    private const double Decibels = 0.05 + 0.02;

    // Two decimals of a ratio and whole degrees, likewise.
    private const double Ratio = 0.005 + 0.001, Degrees = 0.5 + 0.2;

    // Gains and losses of both modalities; the pair of sides that differs most.
    private static readonly string[] Regions = ["thalamus", "cuneate-nucleus", "medial-geniculate"];

    private static readonly RegionLibrary Library = RegionLibrary.Load();

    private static readonly Lazy<Assessment> OnPhantom = new(() =>
    {
        using ScratchFolder folder = new();
        PhantomStudy.WriteFiles(PhantomHead.Generate(PhantomKind.Adult, 0.002), folder.Path);
        return Run(folder, Text(Regions.Select(r => r + "-left").Append("medial-geniculate-right").Append("pons")));
    });

    [Theory]
    [InlineData("thalamus-left")]
    [InlineData("cuneate-nucleus-left")]
    [InlineData("medial-geniculate-left")]
    [InlineData("pons")]
    public void Phantom_GivesTheFiguresOfTheTable(string region)
    {
        RealisticHeadEffect told = Library.Find(region)!.RealisticHead!;
        Near(told.Phantom, Change(OnPhantom.Value, region), Decibels);
        SplitSummary split = Region(OnPhantom.Value, region).Split!;
        Assert.InRange(split.WeakestOverStrongest.P50!.Value, told.WeakestOverStrongest - Ratio, told.WeakestOverStrongest + Ratio);
        Assert.InRange(split.AngleToRadialDeg.P50!.Value, told.WeakestToOutwardDeg - Degrees, told.WeakestToOutwardDeg + Degrees);
    }

    // The medial geniculate differs most between the sides, of all regions of the library.
    [Fact]
    public void Phantom_RightSide_DiffersFromTheLeftByNoMoreThanIsSaid()
    {
        HeadChange left = Change(OnPhantom.Value, "medial-geniculate-left"), right = Change(OnPhantom.Value, "medial-geniculate-right");
        Near(left, right, RealisticHead.SidesDiffer);
        Assert.True(Math.Abs(left.MegBestChannel - right.MegBestChannel) > RealisticHead.SidesDiffer - 0.1, "what is said is the difference that was found, rounded up to a tenth");
    }

    [Fact]
    public void Result_CarriesTheFiguresOfItsRegions() => Assert.All(OnPhantom.Value.Responses[0].Regions, region =>
        Assert.Equal(Library.Find(region.Region)!.RealisticHead, Assert.Single(region.RealisticHeads)));

    [RealVolumeFact]
    public void RealHead_GivesTheFiguresOfTheTable()
    {
        using ScratchFolder folder = new();
        string marks = string.Join(", ", LabelledHeads.RealLandmarks().Select(l => string.Create(CultureInfo.InvariantCulture, $"{l.Key}: [{1000 * l.Value.X:0.###}, {1000 * l.Value.Y:0.###}, {1000 * l.Value.Z:0.###}]")));
        string text = WholeChain.Changed(Text(Regions.Select(r => r + "-left")),
            ("phantom-head.nii.gz", LabelledHeads.RealHead("head_2mm.nii.gz")!),
            ("conductivity_S_per_m: 0.008}", "conductivity_S_per_m: 0.0132}"),
            ("conductivity_S_per_m: 0.025}", "conductivity_S_per_m: 0.0132}"));
        int from = text.IndexOf("    landmarks_mm", StringComparison.Ordinal), to = text.IndexOf('\n', from);
        Assessment assessment = Run(folder, $"{text[..from]}    landmarks_mm: {{{marks}}}{text[to..]}");
        Assert.All(Regions, r => Near(Library.Find(r + "-left")!.RealisticHead!.RealHead, Change(assessment, r + "-left"), Decibels));
    }

    private static void Near(HeadChange expected, HeadChange actual, double tolerance)
    {
        Assert.InRange(actual.EegCzMastoids, expected.EegCzMastoids - tolerance, expected.EegCzMastoids + tolerance);
        Assert.InRange(actual.EegBestChannel, expected.EegBestChannel - tolerance, expected.EegBestChannel + tolerance);
        Assert.InRange(actual.MegBestChannel, expected.MegBestChannel - tolerance, expected.MegBestChannel + tolerance);
    }

    private static HeadChange Change(Assessment assessment, string region)
    {
        RegionResult head = Region(assessment, region), spheres = Region(Assert.Single(assessment.Variants).Assessment, region);
        double Of(Modality modality, string measure) => Db(head, modality, measure) - Db(spheres, modality, measure);
        return new(Of(Modality.Eeg, "Cz-mastoids"), Of(Modality.Eeg, Names.BestChannel), Of(Modality.Meg, Names.BestChannel));
    }

    private static double Db(RegionResult region, Modality modality, string measure) => region.Find(modality, DirectionName.Isotropic, measure)!.SnrDb.P50!.Value;

    private static RegionResult Region(Assessment assessment, string region) => assessment.Responses[0].Regions.Single(r => r.Region == region);

    /// <summary>The numbered study with other regions, without its cortex and its variants of tissues.</summary>
    private static string Text(IEnumerable<string> regions)
    {
        string text = File.ReadAllText(Path.Combine(AppContext.BaseDirectory, "Studies", "10-head-against-spheres.yaml"));
        int At(string mark) => text.IndexOf(mark, StringComparison.Ordinal) is >= 0 and var at ? at : throw new InvalidOperationException($"the study has no '{mark}'");
        int first = At("      - thalamus-left"), moment = At("    moment_nAm"), cortex = At("  - name: cortical source"), target = At("target:"), tissues = At("  - name: four tissues");
        return text[..first] + string.Concat(regions.Select(r => $"      - {r}\n")) + text[moment..cortex] + text[target..tissues];
    }

    private static Assessment Run(ScratchFolder folder, string text)
    {
        RunSettings settings = WholeChain.Settings with { CacheFolder = folder.At("cache") };
        return StudyPipeline.Assess(StudyPipeline.Prepare(folder.Write("study.yaml", text), Purpose.Assess, settings), settings, null);
    }
}
