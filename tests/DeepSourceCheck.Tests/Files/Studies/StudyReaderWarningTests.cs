using DeepSourceCheck.Files.Studies;

namespace DeepSourceCheck.Tests.Files.Studies;

/// <summary>Each warning of the reader, provoked; and studies without a reason for one read without.</summary>
public class StudyReaderWarningTests
{
    [Theory]
    [InlineData("rate_per_s: 11.1", "rate_per_s: 1000", "protocol.rate_per_s: 1000 1/s|0.05 to 200|more than 3 times")]
    [InlineData("moment_nAm: 3.5", "moment_nAm: 1200", "responses.wave V.moment_nAm: 1200 nAm|0.05 to 300|check the unit")]
    [InlineData("eeg_sensor_nV_per_rtHz: 20", "eeg_sensor_nV_per_rtHz: 0.5", "noise.eeg_sensor_nV_per_rtHz: 0.5")]
    [InlineData("meg_sensor_fT_per_rtHz: 5", "meg_sensor_fT_per_rtHz: 0.05", "noise.meg_sensor_fT_per_rtHz: 0.05")]
    [InlineData("direction: tangential", "window_ms: 100", "responses.wave V.window_ms: 100 ms|longer than the 90 ms between stimuli")]
    [InlineData("  brain: default\n", "", "noise: the EEG and MEG noise is the instrument's alone|lower bounds")]
    [InlineData("  brain: default\n", "  brain: none\n", "noise: the EEG and MEG noise is the instrument's alone")]
    [InlineData("name: nucleus", "name: pons", "regions[0].name: this region stands in for the library's region pons")]
    [InlineData("  brain: default\n", "  brain: default\n  meg_planar_fT_per_cm_rtHz: 3\n", "noise.meg_planar_fT_per_cm_rtHz: has no effect|magnetometer")]
    [InlineData("  meg: {coil: magnetometer}\n", "", "noise.meg_sensor_fT_per_rtHz: has no effect|no MEG sensors")]
    [InlineData("  eeg: {layout: ten-ten-64, reference: average}\n", "", "noise.eeg_sensor_nV_per_rtHz: has no effect|no electrodes")]
    public void Study_WithAReasonForAWarning_StatesKeyValueAndReason(string place, string replacement, string parts)
    {
        string text = StudyText.Small.With(place, replacement);
        text = text.Replace("[pons, nucleus]", "[pons]", StringComparison.Ordinal);
        IReadOnlyList<string> warnings = StudyText.Read(text).Warnings;
        Assert.Contains(warnings, w => parts.Split('|').All(part => w.Contains(part, StringComparison.Ordinal)));
    }

    [Fact]
    public void OneLook_InAWindow_WarnsWithTheLooksThatTheWindowHolds()
    {
        // 2 B T = 2 x 1400 Hz x 10 ms = 28.
        string text = StudyText.Small.With("direction: tangential", "window_ms: 10").With("amplitude_ratio: 3", "detection: {looks: 1}");
        string warning = Assert.Single(StudyText.Read(text).Warnings);
        Assert.Contains("about 28 independent looks", warning, StringComparison.Ordinal);
        Assert.Contains("fixed in advance", warning, StringComparison.Ordinal);
        Assert.Empty(StudyText.Read(text.With("looks: 1", "looks: 28")).Warnings);
    }

    [Fact]
    public void SkullRatioAndHeadRadius_FarOutside_Warn()
    {
        string text = StudyText.Tables.With("radial_S_per_m: 0.0132", "radial_S_per_m: 0.00066").With("radius_mm: 92", "radius_mm: 400");
        IReadOnlyList<string> warnings = StudyText.Read(text).Warnings;
        Assert.Contains(warnings, w => w.StartsWith("head.spheres.layers[2].radial_S_per_m: the ratio", StringComparison.Ordinal) && w.Contains("500", StringComparison.Ordinal));
        Assert.Contains(warnings, w => w.StartsWith("head.spheres.layers[3].radius_mm: the head's radius 400 mm", StringComparison.Ordinal));
    }

    [Theory]
    [InlineData("responses.wave V.moment_nAm")]
    [InlineData("\"responses[0].moment_nAm\"")]
    public void ImplausibleValue_ThatTheStudyAccepts_Warns(string entry)
    {
        string text = StudyText.Small.With("moment_nAm: 3.5", "moment_nAm: 35000").With("title: small", $"title: small\naccept_implausible: [{entry}]");
        StudyReading reading = StudyText.Read(text);
        Assert.Contains("accepted by accept_implausible", Assert.Single(reading.Warnings), StringComparison.Ordinal);
        Assert.Equal(["responses.wave V.moment_nAm"], reading.Study.AcceptImplausible);
    }

    [Fact]
    public void ImplausibleRegion_MayBeAcceptedByNameOrNumber()
    {
        string text = StudyText.Small.With("title: small", "title: small\naccept_implausible: [regions.nucleus.ellipsoid, \"regions[0]\"]");
        Assert.Equal(["regions[0].ellipsoid", "regions[0]"], StudyText.Read(text).Study.AcceptImplausible);
    }

    [Theory]
    [InlineData("meg_sensor_fT_per_rtHz: 5", "meg_sensor_fT_per_rtHz: 15")]
    [InlineData("coil: magnetometer", "coil: on-scalp")]
    public void OnScalpSensors_AtTheirUsualNoise_DoNotWarn(string place, string replacement) =>
        Assert.Empty(StudyText.Read(StudyText.Small.With(place, replacement)).Warnings);

    [Theory]
    [InlineData(StudyText.Small)]
    [InlineData(StudyText.Tables)]
    [InlineData(StudyText.Imported)]
    public void SoundStudy_ReadsWithoutWarnings(string text) => Assert.Empty(StudyText.Read(text).Warnings);
}
