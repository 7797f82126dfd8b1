using DeepSourceCheck.Core.Heads;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Files.Studies;

namespace DeepSourceCheck.Tests.Files.Studies;

/// <summary>Variants: what a variant overrides, what it leaves, and what is refused.</summary>
public class VariantTests
{
    [Fact]
    public void Variant_OverridesItsKeysAndLeavesTheStudyAlone()
    {
        StudyReading study = StudyText.Read(StudyText.Small + "\nvariants: [{name: three layers, head: {spheres: {preset: adult-3}}, protocol: {session_min: 20}}]");
        VariantReading variant = Assert.Single(study.Variants);
        Assert.Equal("three layers", variant.Name);
        Assert.Equal(3, Assert.IsType<SphereHeadChoice>(variant.Reading.Study.Head).Sphere.Layers.Count);
        Assert.Equal((11.1, 1200.0), (variant.Reading.Study.Protocol!.Rate, variant.Reading.Study.Protocol.Session));
        Assert.Equal(4, Assert.IsType<SphereHeadChoice>(study.Study.Head).Sphere.Layers.Count);
        Assert.Null(study.Study.Protocol!.Session);
        Assert.Equal(study.Study.Responses, variant.Reading.Study.Responses, (a, b) => a.Name == b.Name && a.Moment == b.Moment);
    }

    [Fact]
    public void Layers_TakeThePlaceOfThePreset()
    {
        StudyReading study = StudyText.Read(StudyText.Small + "\nvariants: [{name: ball, head: {spheres: {centre_mm: [0, -18, 5], layers: [{tissue: brain, radius_mm: 92, conductivity_S_per_m: 0.33}]}}}]");
        LayeredSphere sphere = Assert.IsType<SphereHeadChoice>(study.Variants[0].Reading.Study.Head).Sphere;
        Assert.Equal(0.33, Assert.Single(sphere.Layers).RadialConductivity);
    }

    [Fact]
    public void EntriesOfResponsesAndRegions_MergeByName()
    {
        StudyReading study = StudyText.Read(StudyText.Small + "\nvariants: [{name: v, responses: [{name: wave V, moment_nAm: 7}], regions: [{name: nucleus, points: points.tsv}, {name: other, points: points.tsv}]}]");
        Study variant = study.Variants[0].Reading.Study;
        Response response = Assert.Single(variant.Responses);
        Assert.Equal((7e-9, new Band(100, 1500)), (response.Moment, response.Band));
        Assert.Equal(["nucleus", "other"], variant.Regions.Select(r => r.Name));
        Assert.Equal(("points.tsv", null), (variant.Regions[0].Points, variant.Regions[0].Ellipsoid));
    }

    [Fact]
    public void ANewKindOfCoil_TakesBaselineAndGapAway()
    {
        StudyReading study = StudyText.Read(StudyText.Small.With("{coil: magnetometer}", "{coil: axial-gradiometer, sites: 100, baseline_mm: 50, gap_mm: 33}")
            + "\nvariants: [{name: v, sensors: {meg: {coil: on-scalp}}}]");
        CoilArrayChoice array = study.Variants[0].Reading.Study.Meg!.Generated!;
        Assert.Equal(("on-scalp", 100, 0.007), (array.Coil, array.Sites, array.Gap));
    }

    [Fact]
    public void FlatNoise_TakesThePlaceOfTheSpectralOne()
    {
        StudyReading study = StudyText.Read(StudyText.Small.With("  brain: default\n", "") + "\nvariants: [{name: v, noise: {eeg_sensor_uV_rms: 3}}]");
        NoiseChoice noise = study.Variants[0].Reading.Study.Noise!;
        Assert.Equal((3e-6, null, 5e-15), (noise.EegRms, noise.EegDensity, noise.MegDensity));
    }

    [Fact]
    public void LaterVariants_StartFromTheStudyNotFromEarlierOnes()
    {
        StudyReading study = StudyText.Read(StudyText.Small + "\nvariants: [{name: a, protocol: {session_min: 20}}, {name: b, protocol: {conditions: 2}}]");
        Assert.Equal((null, 2), (study.Variants[1].Reading.Study.Protocol!.Session, study.Variants[1].Reading.Study.Protocol!.Conditions));
    }

    [Theory]
    [InlineData("[{head: {spheres: {preset: adult-3}}}]", "variants[0].name", "missing")]
    [InlineData("[{name: a, title: other}]", "variants[0].title", "cannot override 'title'")]
    [InlineData("[{name: a, protokol: {session_min: 1}}]", "variants[0].protokol", "the nearest is protocol")]
    [InlineData("[{name: a}]", "variants[0]", "overrides nothing")]
    [InlineData("[{name: a, protocol: {session_min: 5}}, {name: a, protocol: {session_min: 6}}]", "variants[1].name", "two variants 'a'")]
    [InlineData("[three layers]", "variants[0]", "is a single value")]
    [InlineData("three layers", "variants", "is a single value")]
    [InlineData("[]", "variants", "has 0 entries")]
    [InlineData("[{name: a, head: {spheres: {preset: adult-5}}}]", "head.spheres.preset", "variant 'a': 'adult-5' is not allowed")]
    [InlineData("[{name: a, noise: {eeg_sensor_nV_rtHz: 20}}]", "noise.eeg_sensor_nV_rtHz", "variant 'a': unknown key")]
    [InlineData("[{name: a, noise: {eeg_sensor_nV_per_rtHz: 20000}}]", "noise.eeg_sensor_nV_per_rtHz", "variant 'a': ")]
    public void WrongVariant_IsRefusedAtItsPlace(string variants, string key, string words)
    {
        InputProblem problem = StudyText.Problem(StudyText.Small + "\nvariants: " + variants);
        Assert.Equal(key, problem.Key);
        Assert.Contains(words, problem.Message, StringComparison.Ordinal);
        Assert.Equal(StudyText.Small.Split('\n').Length + 1, problem.Line);
    }
}
