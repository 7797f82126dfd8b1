using System.Text.RegularExpressions;

using DeepSourceCheck.Cli.Pipeline;
using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Files.Studies;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Verification.EndToEnd;

/// <summary>Studies that lack a modality, stand at the centre, act together, or come back from files.</summary>
public class WholeStudyTests
{
    private const string Response = "responses: [{name: r, regions: [thalamus-left], moment_nAm: 10, band_Hz: [1, 40], direction: tangential}]\n";

    private static readonly Vec3 Centre = new(0, -18, 5);

    [Fact]
    public void EegAlone_IsComplete_AndSplitsDirectionsByABuiltInArray()
    {
        WholeChain study = WholeChain.Run(WholeChain.Adult + "sensors: {eeg: {layout: ten-twenty-21, reference: average}}\nnoise: {brain: default, eeg_sensor_nV_per_rtHz: 20}\n" + Response);
        Assert.All(study.Region().Results, r => Assert.Equal(Modality.Eeg, r.Modality));
        Assert.Equal(5 * 3, study.Region().Results.Count);                     // five directions, three measures
        Assert.All(study.Region().Results, r => Assert.NotNull(r.SnrDb.P50));
        Assert.NotNull(study.Region().Split);
        Assert.Contains(study.Assessment.Warnings, w => w.Contains("built-in one of 300 magnetometers", StringComparison.Ordinal));
        Assert.Single(study.Region().Verdicts);
        Assert.Null(study.Region().FieldCaptured);
        Assert.DoesNotContain(study.Assessment.Warnings, w => w.Contains("MEG power", StringComparison.Ordinal));
    }

    [Fact]
    public void MegAlone_IsComplete()
    {
        WholeChain study = WholeChain.Run(WholeChain.Adult + "sensors: {meg: {coil: planar-gradiometer}}\nnoise: {meg_planar_fT_per_cm_rtHz: 3, brain: default}\n" + Response);
        Assert.All(study.Region().Results, r => Assert.Equal(Modality.Meg, r.Modality));
        Assert.Equal(5 * 3, study.Region().Results.Count);
        Assert.Equal("fT/cm", study.Row(Modality.Meg, DirectionName.Tangential, Names.BestChannel).Peak!.Unit);
        Assert.Single(study.Region().Verdicts);
        Assert.DoesNotContain(study.Assessment.Warnings, w => w.Contains("built-in", StringComparison.Ordinal));
    }

    [Fact]
    public void SplitOfTheBuiltInArray_GivesTheDirectionsOfARealOne()
    {
        // In a sphere the direction that MEG does not see is the radius, whatever the array.
        string eeg = WholeChain.Adult + "sensors: {eeg: {layout: ten-twenty-21, reference: average}}\nnoise: {eeg_sensor_uV_rms: 2}\n" + Response;
        string both = WholeChain.Adult + "sensors: {eeg: {layout: ten-twenty-21, reference: average}, meg: {coil: axial-gradiometer}}\nnoise: {eeg_sensor_uV_rms: 2, meg_sensor_fT_rms: 200}\n" + Response;
        double alone = WholeChain.Run(eeg).Db(Modality.Eeg, DirectionName.QuasiRadial, Names.BestChannel);
        RelativeAssert.Equal(WholeChain.Run(both).Db(Modality.Eeg, DirectionName.QuasiRadial, Names.BestChannel), alone, 1e-9);
    }

    [Fact]
    public void SourcesOnBothSides_CancelInMegAndAddInEeg()
    {
        // Parallel dipoles on opposite sides of the centre: r0 changes sign, Q x r0 with it, so that their fields oppose; their potentials add.
        string study = WholeChain.Adult + """
            sensors: {eeg: {layout: ten-ten-64, reference: average}, eeg_derivations: [Cz-mastoids], meg: {coil: magnetometer, sites: 200, gap_mm: 20}}
            noise: {eeg_sensor_uV_rms: 2, meg_sensor_fT_rms: 100}
            regions: [{name: one, points: one.tsv}, {name: other, points: other.tsv}]
            responses:
              - {name: each, regions: [one, other], moment_nAm: 10, band_Hz: [1, 40], direction: [0, 0, 1]}
              - {name: together, regions: [one, other], counts: together, moment_nAm: 10, band_Hz: [1, 40], direction: [0, 0, 1]}
            """;
        WholeChain run = WholeChain.Run(study, WholeChain.Points("one.tsv", ("p", Centre + new Vec3(15, 0, 0))), WholeChain.Points("other.tsv", ("p", Centre - new Vec3(15, 0, 0))));
        Assert.Equal("one + other", run.Region(1).Region);
        double meg = run.Db(Modality.Meg, DirectionName.Given, Names.BestChannel, 1) - run.Db(Modality.Meg, DirectionName.Given, Names.BestChannel, 0);
        double eeg = run.Db(Modality.Eeg, DirectionName.Given, "Cz-mastoids", 1) - run.Db(Modality.Eeg, DirectionName.Given, "Cz-mastoids", 0);
        Assert.True(meg < -6, $"MEG {meg:F1} dB");
        Assert.InRange(eeg, -1, 1);

        // The mean of the two is the centre itself, where a lone dipole would have no directions; the pair has.
        Assert.Equal(0, run.Region(1).Split!.UndefinedDipoles);
        Assert.NotNull(run.Row(Modality.Meg, DirectionName.StrongestTangential, Names.BestChannel, 1).SnrDb.P50);
    }

    [Fact]
    public void RegionAtTheCentre_HasNoDirections_AndSaysWhy()
    {
        string study = WholeChain.Adult + """
            sensors: {eeg: {layout: ten-ten-64, reference: average}, eeg_derivations: [Cz-mastoids], meg: {coil: magnetometer}}
            noise: {eeg_sensor_uV_rms: 2, meg_sensor_fT_rms: 100}
            regions: [{name: centre, points: centre.tsv}, {name: around, points: around.tsv}]
            responses: [{name: r, regions: [centre, around], moment_nAm: 10, band_Hz: [1, 40], direction: tangential}]
            """;
        WholeChain run = WholeChain.Run(study, WholeChain.Points("centre.tsv", ("c", Centre)),
            WholeChain.Points("around.tsv", ("c", Centre), ("a", Centre + new Vec3(3, 0, 0)), ("b", Centre + new Vec3(0, -4, 2))));
        Assert.Equal(1, run.Region().Split!.UndefinedDipoles);
        Assert.Contains(run.Region().Warnings, w => w.StartsWith("centre: at 1 of its dipoles MEG sees nothing", StringComparison.Ordinal));
        Assert.Contains(run.Region().Warnings, w => w.Contains("0 mm from the sphere's centre, where MEG vanishes; a centre that is off makes something of nothing", StringComparison.Ordinal));
        foreach (Modality modality in new[] { Modality.Eeg, Modality.Meg })
        {
            MeasureResult split = run.Row(modality, DirectionName.Tangential, Names.BestChannel);
            Assert.Null(split.SnrDb.P50);
            Assert.Null(split.Peak);
            Assert.Contains("undefined", split.Reason, StringComparison.Ordinal);
            Assert.Contains("undefined", split.Targets[0].Reason, StringComparison.Ordinal);
        }

        Assert.NotNull(run.Row(Modality.Eeg, DirectionName.Isotropic, Names.BestChannel).SnrDb.P50);       // direction-free figures stay
        MeasureResult silent = run.Row(Modality.Meg, DirectionName.Isotropic, Names.BestChannel);
        Assert.Null(silent.SnrDb.P50);
        Assert.StartsWith("silent", silent.Reason, StringComparison.Ordinal);
        Assert.Contains("out of reach by averaging", run.Region().Verdicts.Single(v => v.Modality == Modality.Meg).Text, StringComparison.Ordinal);

        // Two of three dipoles stand off the centre: their figures are given.
        Assert.Equal(1, run.Region(0, 1).Split!.UndefinedDipoles);
        Assert.NotNull(run.Row(Modality.Meg, DirectionName.Tangential, Names.BestChannel, 0, 1).SnrDb.P50);
    }

    [Theory]
    [InlineData("inferior-colliculus-left", 0.98, 1.0)]
    [InlineData("thalamus-left", 0.98, 1.0)]
    [InlineData("cuneate-nucleus-left", 0.1, 0.98)]
    [InlineData("medulla", 0.1, 0.98)]
    public void Coverage_OfLowSources_IsSaid(string region, double low, double high)
    {
        // A helmet does not cover the whole sphere: the peaks of the low brainstem leave the head below it.
        WholeChain study = WholeChain.Default(("[inferior-colliculus-left, inferior-colliculus-right]", $"[{region}]"));
        double share = study.Region().FieldCaptured!.Value;
        Assert.InRange(share, low, high);
        Assert.Equal(share < 0.98, study.Region().Warnings.Any(w => Regex.IsMatch(w, "captures [0-9]+ % of the largest field")));
    }

    [Fact]
    public void Leadfields_WrittenAndReadBack_GiveTheSameAssessment()
    {
        // float64 arrays; the reference is taken once more on reading, which costs its rounding.
        const double decibels = 1e-9;
        const string sensors = "sensors: {eeg: {layout: ten-ten-64, reference: average}, meg: {coil: axial-gradiometer, sites: 60}}\n";
        const string rest = """
            noise: {eeg_sensor_uV_rms: 2, meg_sensor_fT_rms: 180}
            responses: [{name: r, regions: [probes], moment_nAm: 10, band_Hz: [1, 40], direction: [0.3, -0.5, 0.8]}]
            target: {amplitude_ratio: 3, detection: {alpha: 0.01, power: 0.9, looks: 28}}
            protocol: {rate_per_s: 10, session_min: 60}

            """;
        using ScratchFolder folder = new();
        (string name, string text) = WholeChain.Points("probes.tsv", ("a", new(6, -34, -11)), ("b", new(-27, -22, -14)), ("c", new(20, 10, 30)), ("outside", new(0, 200, 0)), ("d", new(-9, -60, 20)));
        folder.Write(name, text);
        const string regions = "regions: [{name: probes, points: probes.tsv}]\n";
        string direct = folder.Write("direct.yaml", WholeChain.Adult + sensors + regions + rest);
        StudyPipeline.WriteLeadfield(StudyPipeline.Prepare(direct, Purpose.Leadfield, WholeChain.Settings), folder.Path, WholeChain.Settings);
        string imported = folder.Write("imported.yaml",
            "head: {leadfields: {eeg: eeg.npy, meg: meg.npy, points: points.tsv, rows: rows.tsv}}\nsensors: {eeg: {reference: average}}\n" + regions + rest);

        WholeChain first = WholeChain.RunFile(direct), second = WholeChain.RunFile(imported);
        Assert.Equal(1, first.Region().Dropped);
        Assert.Equal(1, second.Region().Dropped);
        Assert.Equal(first.Region().Results.Count, second.Region().Results.Count);
        foreach ((MeasureResult a, MeasureResult b) in first.Region().Results.Zip(second.Region().Results))
        {
            string what = $"{a.Modality} {a.Direction} {a.Measure}";
            Assert.Equal((a.Modality, a.Direction, a.Measure), (b.Modality, b.Direction, b.Measure));
            Assert.Equal(a.SnrDb.P50 is null, b.SnrDb.P50 is null);
            if (a.SnrDb is { P05: { } low, P95: { } high })
            {
                Assert.True(Math.Abs(low - b.SnrDb.P05!.Value) < decibels && Math.Abs(high - b.SnrDb.P95!.Value) < decibels, what);
            }

            Assert.Equal(a.Targets.Select(t => t.Trials.P50), b.Targets.Select(t => t.Trials.P50));
        }

        Assert.Equal(first.Region().Verdicts.Select(v => v.Text), second.Region().Verdicts.Select(v => v.Text));
    }
}
