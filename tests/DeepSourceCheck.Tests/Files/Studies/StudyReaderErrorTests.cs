using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Files.Studies;

namespace DeepSourceCheck.Tests.Files.Studies;

/// <summary>Each way in which a study can be wrong: the key, the place and the key parts of the message.</summary>
public class StudyReaderErrorTests
{
    private static readonly Dictionary<string, string> Bases = new() { ["small"] = StudyText.Small, ["tables"] = StudyText.Tables, ["imported"] = StudyText.Imported };

    [Theory]
    // values
    [InlineData("small", "moment_nAm: 3.5", "moment_nAm: 3,5", "responses.wave V.moment_nAm", "'3,5'|decimal sign is a point|above 0")]
    [InlineData("small", "moment_nAm: 3.5", "moment_nAm: 1_000", "responses.wave V.moment_nAm", "not grouped by _")]
    [InlineData("small", "moment_nAm: 3.5", "moment_nAm: 0x1F", "responses.wave V.moment_nAm", "only decimal numbers")]
    [InlineData("small", "moment_nAm: 3.5", "moment_nAm: .nan", "responses.wave V.moment_nAm", "finite")]
    [InlineData("small", "moment_nAm: 3.5", "moment_nAm: -.inf", "responses.wave V.moment_nAm", "finite")]
    [InlineData("small", "moment_nAm: 3.5", "moment_nAm: \"3.5\"", "responses.wave V.moment_nAm", "quotes")]
    [InlineData("small", "moment_nAm: 3.5", "moment_nAm: 1e999", "responses.wave V.moment_nAm", "too large")]
    [InlineData("small", "moment_nAm: 3.5", "moment_nAm: 1e-999", "responses.wave V.moment_nAm", "too small")]
    [InlineData("small", "moment_nAm: 3.5", "moment_nAm: twelve", "responses.wave V.moment_nAm", "'twelve'|not a number")]
    [InlineData("small", "moment_nAm: 3.5", "moment_nAm: -2", "responses.wave V.moment_nAm", "-2|out of range|above 0")]
    [InlineData("small", "moment_nAm: 3.5", "moment_nAm:", "responses.wave V.moment_nAm", "no value|above 0")]
    [InlineData("small", "moment_nAm: 3.5", "moment_nAm: ~", "responses.wave V.moment_nAm", "no value")]
    [InlineData("small", "moment_nAm: 3.5", "moment_nAm: [3.5]", "responses.wave V.moment_nAm", "is a list|above 0")]
    [InlineData("small", "amplitude_ratio: 3", "amplitude_ratio: {of: 3}", "target.amplitude_ratio", "keys with values|above 0")]
    [InlineData("small", "{coil: magnetometer}", "{coil: magnetometer, sites: 20.5}", "sensors.meg.sites", "20.5|whole number from 1 up to 10000")]
    [InlineData("small", "{coil: magnetometer}", "{coil: magnetometer, sites: 2000000000}", "sensors.meg.sites", "2000000000|up to 10000")]
    [InlineData("small", "{coil: magnetometer}", "{coil: magnetometr}", "sensors.meg.coil", "'magnetometr'|planar-gradiometer|the nearest is magnetometer")]
    [InlineData("small", "[100, 1500]", "[1500, 100]", "responses.wave V.band_Hz", "[1500, 100]|not ordered|low below high")]
    [InlineData("small", "[100, 1500]", "[100, 1500, 3000]", "responses.wave V.band_Hz", "has 3 entries|two numbers")]
    [InlineData("small", "[100, 1500]", "[100, x]", "responses.wave V.band_Hz", "'x'|not a number")]
    [InlineData("small", "[100, 1500]", "1500", "responses.wave V.band_Hz", "brackets: [1500]")]
    [InlineData("small", "[pons, nucleus]", "pons", "responses.wave V.regions", "brackets: [pons]")]
    [InlineData("small", "[pons, nucleus]", "[]", "responses.wave V.regions", "is empty|at least 1")]
    [InlineData("small", "direction: tangential", "direction: up", "responses.wave V.direction", "'up'|quasi-radial|3 numbers")]
    [InlineData("small", "direction: tangential", "direction: [0, 0, 0]", "responses.wave V.direction", "no direction")]
    [InlineData("small", "name: wave V", "name: \"wave\\tV\"", "responses[0].name", "control or invisible")]
    [InlineData("small", "name: wave V", "name: ' '", "responses[0].name", "is empty")]
    [InlineData("small", "responses:\n  - name: wave V", "responses:\n  - 3\n  - name: wave V", "responses[0]", "single value|a response {name")]
    // keys
    [InlineData("small", "moment_nAm: 3.5", "moment_nAm: 3.5\n    directon: best", "responses.wave V.directon", "unknown key 'directon'|nearest known one is direction|allowed here: name, kind")]
    [InlineData("small", "moment_nAm: 3.5", "moment_nAm: 3.5\n    rate_per_s: 4", "responses.wave V.rate_per_s", "does not belong here|protocol.rate_per_s")]
    [InlineData("small", "title: small", "tilte: small", "tilte", "unknown key 'tilte'|nearest known one is title")]
    [InlineData("small", "    moment_nAm: 3.5\n", "", "responses.wave V.moment_nAm", "is missing|nAm")]
    [InlineData("small", "    band_Hz: [100, 1500]\n", "", "responses.wave V.band_Hz", "is missing|the band|[100, 1500]")]
    [InlineData("small", "head: {spheres: {preset: adult-4}}\n", "", "head", "is missing")]
    [InlineData("small", "rate_per_s: 11.1", "rejected_fraction: 0.1", "protocol.rate_per_s", "is missing")]
    [InlineData("small", "rate_per_s: 11.1", "rate_per_s: 11.1, rejected_fraction: 1", "protocol.rejected_fraction", "out of range|to below 1")]
    [InlineData("small", "{amplitude_ratio: 3}", "{}", "target", "states no rule|amplitude_ratio")]
    [InlineData("small", "{amplitude_ratio: 3}", "{detection: {alpha: 0.2, power: 0.1}}", "target.detection.power", "0.1 is not above|alpha 0.2")]
    // head
    [InlineData("small", "{spheres: {preset: adult-4}}", "{}", "head", "none of spheres, voxels, leadfields")]
    [InlineData("small", "{spheres: {preset: adult-4}}", "{spheres: {preset: adult-4}, leadfields: {eeg: eeg.npy, points: points.tsv, rows: rows.tsv}}", "head.leadfields", "beside spheres|exactly one")]
    [InlineData("small", "{preset: adult-4}", "{preset: adult-5}", "head.spheres.preset", "'adult-5'|nearest is adult-4")]
    [InlineData("small", "{preset: adult-4}", "{preset: adult-4, layers: [{tissue: brain, radius_mm: 80, conductivity_S_per_m: 0.33}]}", "head.spheres.layers", "beside preset")]
    [InlineData("tables", "radius_mm: 80", "radius_mm: 78", "head.spheres.layers[1].radius_mm", "78 mm is not larger than the 78 mm|innermost")]
    [InlineData("tables", "radius_mm: 80, conductivity_S_per_m: 1.79", "radius_mm: 80", "head.spheres.layers[1]", "no conductivity|radial_S_per_m and tangential_S_per_m")]
    [InlineData("tables", "radius_mm: 80, conductivity_S_per_m: 1.79", "radius_mm: 80, conductivity_S_per_m: 1.79, radial_S_per_m: 1", "head.spheres.layers[1].conductivity_S_per_m", "beside radial_S_per_m")]
    [InlineData("tables", "radial_S_per_m: 0.0132, ", "", "head.spheres.layers[2].radial_S_per_m", "is missing|together")]
    [InlineData("small", "title: small", "title: small\naccept_implausible: [head.spheres.preset, \"responses[1]\"]", "accept_implausible", "'responses[1]'")]
    [InlineData("imported", "eeg: eeg.npy, meg: meg.npy, points", "points", "head.leadfields", "neither eeg nor meg")]
    // sensors
    [InlineData("small", "layout: ten-ten-64", "layout: ten-ten-64, electrodes: electrodes.tsv", "sensors.eeg.electrodes", "beside layout")]
    [InlineData("small", "layout: ten-ten-64", "layout: ten-ten-64, coordinates: coordsystem.json", "sensors.eeg.coordinates", "table of electrodes")]
    [InlineData("small", "layout: ten-ten-64, ", "", "sensors.eeg", "none of layout, electrodes")]
    [InlineData("small", "reference: average", "reference: [Cz, Cz]", "sensors.eeg.reference", "twice")]
    [InlineData("small", "Cz-M1]", "Cz]", "sensors.eeg_derivations", "'Cz' is no difference|Cz-mastoids")]
    [InlineData("small", "Cz-M1]", "Cz-Cz]", "sensors.eeg_derivations", "itself")]
    [InlineData("small", "Cz-M1]", "Cz-mastoids]", "sensors.eeg_derivations", "stands twice")]
    [InlineData("small", "{coil: magnetometer}", "{coil: magnetometer, coils: coils.tsv}", "sensors.meg.coil", "beside coils")]
    [InlineData("small", "{coil: magnetometer}", "{coil: magnetometer, baseline_mm: 50}", "sensors.meg.baseline_mm", "gradiometers|magnetometer has none")]
    [InlineData("tables", "{coils: coils.tsv}", "{coils: coils.tsv, sites: 100}", "sensors.meg.sites", "generated array")]
    [InlineData("tables", "{coils: coils.tsv}", "{coils: coils.tsv}\n  meg_edge_deg: {front: 10}", "sensors.meg_edge_deg", "generated array")]
    [InlineData("tables", "coils: coils.tsv", "coils: coil.tsv", "sensors.meg.coils", "'coil.tsv' does not exist|channel, kind")]
    [InlineData("tables", "coils: coils.tsv", "coils: .", "sensors.meg.coils", "is a folder")]
    [InlineData("tables", "coils: coils.tsv", "coils: \"a\\0b\"", "sensors.meg.coils", "control or invisible")]
    [InlineData("imported", "{reference: none}", "{layout: ten-ten-64}", "sensors.eeg.layout", "not used with head.leadfields|only reference")]
    [InlineData("imported", "{reference: none}", "{reference: none}\n  meg: {coil: magnetometer}", "sensors.meg", "not used with head.leadfields")]
    [InlineData("small", "{coil: magnetometer}", "{coil: magnetometer}\n  sampling_Hz: 3000", "responses.wave V.band_Hz", "1500 Hz|at least 3750|sensors.sampling_Hz is 3000")]
    [InlineData("small", "{coil: magnetometer}", "{coil: magnetometer}\n  bandwidth_Hz: {meg: [0, 135]}", "responses.wave V.band_Hz", "100 to 1500 Hz|0 to 135 Hz|MEG sensors pass|would not record it|remove sensors.meg")]
    [InlineData("small", "{coil: magnetometer}", "{coil: magnetometer}\n  bandwidth_Hz: {eeg: [150, 3000]}", "responses.wave V.band_Hz", "150 to 3000 Hz|EEG passes")]
    // noise
    [InlineData("small", "  eeg_sensor_nV_per_rtHz: 20\n", "", "noise", "no EEG noise|eeg_total")]
    [InlineData("small", "  meg_sensor_fT_per_rtHz: 5\n", "", "noise", "no MEG noise|meg_sensor_fT_per_rtHz")]
    [InlineData("tables", "noise: {eeg_sensor_uV_rms: 8, meg_sensor_fT_rms: 200}\n", "", "noise", "is missing")]
    [InlineData("small", "  brain: default", "  eeg_sensor_uV_rms: 2", "noise.eeg_sensor_uV_rms", "beside eeg_sensor_nV_per_rtHz|nothing else is added|keep one")]
    [InlineData("small", "  brain: default", "  meg_covariance: meg.npy", "noise.meg_covariance", "beside meg_sensor_fT_per_rtHz|keep one")]
    [InlineData("tables", "{eeg_sensor_uV_rms: 8,", "{brain: default, eeg_sensor_uV_rms: 8,", "noise.brain", "flat figures or covariances")]
    [InlineData("imported", "  meg_covariance: meg.npy", "  meg_sensor_fT_per_rtHz: 5\n  brain: default", "noise.brain", "head.leadfields|brain: none")]
    [InlineData("small", "coil: magnetometer", "coil: planar-gradiometer", "noise.meg_sensor_fT_per_rtHz", "planar-gradiometer|meg_planar_fT_per_cm_rtHz")]
    [InlineData("small", "  eeg_sensor_nV_per_rtHz: 20\n", "  eeg_total: {rms_uV: 2, derivation: Cz, band_Hz: [100, 3000]}\n", "noise.eeg_total.derivation", "'Cz' is no difference")]
    [InlineData("small", "  eeg_sensor_nV_per_rtHz: 20\n", "  eeg_total: {rms_uV: 2, derivation: Cz-mastoids}\n", "noise.eeg_total.band_Hz", "is missing")]
    [InlineData("imported", "samples: 20000", "samples: 1", "noise.eeg_covariance.samples", "out of range|from 2")]
    // regions
    [InlineData("small", "[pons, nucleus]", "[pons, nuclues]", "responses.wave V.regions", "no region 'nuclues'|nearest known one is 'nucleus'")]
    [InlineData("small", "[pons, nucleus]", "[pon]", "responses.wave V.regions", "no region 'pon'|nearest known one is 'pons'")]
    [InlineData("small", "[pons, nucleus]", "[pons, pons]", "responses.wave V.regions", "stands twice")]
    [InlineData("imported", "[some]", "[pons]", "responses.slow.regions", "imported leadfields|points")]
    [InlineData("imported", "{name: some, points: points.tsv}", "{name: some, mask: mask.nii.gz, label: 1}", "regions[0].mask", "not used with head.leadfields")]
    [InlineData("small", "{name: nucleus, ", "{name: nucleus, points: points.tsv, ", "regions[0].points", "beside ellipsoid")]
    [InlineData("tables", "points: points.tsv}", "points: points.tsv, spacing_mm: 1}", "regions[0].spacing_mm", "belongs to an ellipsoid or a mask")]
    [InlineData("tables", "points: points.tsv}", "points: points.tsv, label: 1}", "regions[0].label", "belongs to a mask")]
    [InlineData("tables", "label: 1}", "label: 1, threshold: 0.5}", "regions[1].threshold", "beside label")]
    [InlineData("small", "spacing_mm: 1.0", "spacing_mm: 1.0e-6", "regions[0].spacing_mm", "out of range|from 0.05")]
    [InlineData("small", "semi_axes_mm: [4, 3, 2]}, spacing_mm: 1.0", "semi_axes_mm: [40, 30, 20]}, spacing_mm: 0.1", "regions[0].spacing_mm", "100530965 dipoles|wider spacing")]
    [InlineData("small", "direction: tangential", "component_Hz: 50", "responses.wave V.component_Hz", "50 Hz lies outside|100 to 1500 Hz")]
    [InlineData("small", "direction: tangential", "measure: {eeg: Cz-M2}", "responses.wave V.measure.eeg", "'Cz-M2'|Cz-mastoids, Cz-M1")]
    [InlineData("small", "direction: tangential", "measure: {eeg: channel-mean}", "responses.wave V.measure.eeg", "a verdict never stands on it")]
    [InlineData("small", "direction: tangential", "measure: {meg: Cz-M1}", "responses.wave V.measure.meg", "best-channel, matched-filter or realistic-filter")]
    [InlineData("small", "direction: tangential", "direction: tangential\n  - {name: wave V, regions: [pons], moment_nAm: 1, band_Hz: [100, 1500]}", "responses[1].name", "'wave V' stands twice")]
    // plausibility
    [InlineData("small", "moment_nAm: 3.5", "moment_nAm: 3500", "responses.wave V.moment_nAm", "3500 nAm|0.05 to 300|`responses.wave V.moment_nAm` to accept_implausible")]
    [InlineData("small", "eeg_sensor_nV_per_rtHz: 20", "eeg_sensor_nV_per_rtHz: 0.02", "noise.eeg_sensor_nV_per_rtHz", "0.02|2 to 100")]
    [InlineData("small", "meg_sensor_fT_per_rtHz: 5", "meg_sensor_fT_per_rtHz: 5000", "noise.meg_sensor_fT_per_rtHz", "5000|0.2 to 50")]
    [InlineData("small", "rate_per_s: 11.1", "rate_per_s: 11100", "protocol.rate_per_s", "11100|0.05 to 200")]
    [InlineData("tables", "radial_S_per_m: 0.0132", "radial_S_per_m: 0.0002", "head.spheres.layers[2].radial_S_per_m", "ratio of the innermost conductivity to the skull's|5 to 120")]
    [InlineData("small", "title: small", "title: small\naccept_implausible: [responses.wave IV.moment_nAm]", "accept_implausible", "names no key of this study|nearest is responses.wave V.moment_nAm")]
    public void Study_WithOneFault_NamesKeyPlaceValueAndRemedy(string basis, string place, string replacement, string key, string parts)
    {
        string text = Bases[basis].With(place, replacement);
        InputProblem problem = StudyText.Problem(text);
        Assert.Equal(key, problem.Key);
        Assert.Equal("study.yaml", problem.File);
        Assert.All(parts.Split('|'), part => Assert.Contains(part, problem.Message, StringComparison.Ordinal));
        Assert.DoesNotContain('\n', problem.Message);
        Assert.InRange(problem.Line, 1, text.Split('\n').Length);
        Assert.InRange(problem.Column, 1, text.Split('\n')[problem.Line - 1].Length + 1);
    }

    [Theory]
    [InlineData("layout: ten-ten-64", "layout: [1", 0)]
    [InlineData("{coil: magnetometer}", "{coil: nonsense}", 15)]
    [InlineData("moment_nAm: 3.5", "moment_nAm: x", 17)]
    [InlineData("spacing_mm: 1.0", "spacing: 1.0", 86)]
    [InlineData("[pons, nucleus]", "[pons, nucleu]", 21)]
    public void Position_OfAFault_IsWhereItStands(string place, string replacement, int column)
    {
        string text = StudyText.Small.With(place, replacement);
        InputProblem problem = StudyText.Problems(text)[0];
        int line = 1 + StudyText.Small[..StudyText.Small.IndexOf(place, StringComparison.Ordinal)].Count(c => c == '\n');
        if (column > 0)
        {
            Assert.Equal((line, column), (problem.Line, problem.Column));
        }
        else
        {
            Assert.Contains($"bracket opened at line {line}, column 17", problem.Message, StringComparison.Ordinal);
            Assert.True(problem.Line >= line);
        }
    }

    [Fact]
    public void Study_WithSeveralFaults_ReportsAllAtOnceInOrder()
    {
        string text = StudyText.Small.With("adult-4", "adult-9").With("20", "twenty").With("tangential", "[0, 0, 0]").With("rate_per_s: 11.1", "rate: 11.1");
        IReadOnlyList<InputProblem> problems = StudyText.Problems(text);
        Assert.Equal(
            ["head.spheres.preset", "noise.eeg_sensor_nV_per_rtHz", "responses.wave V.direction", "protocol.rate_per_s", "protocol.rate"],
            problems.Select(p => p.Key));
        Assert.Equal(problems.OrderBy(p => p.Line).ThenBy(p => p.Column), problems);
    }

    [Fact]
    public void Study_WithVeryManyFaults_PrintsTwentyAndTheNumberOfTheOthers()
    {
        string wrong = string.Join(", ", Enumerable.Range(0, 3000).Select(k => $"nowhere-{k}"));
        IReadOnlyList<InputProblem> problems = StudyText.Problems(StudyText.Small.With("[pons, nucleus]", $"[{wrong}]"));
        Assert.Equal(21, problems.Count);
        Assert.Equal("and 2980 more", problems[^1].Message);
    }

    [Fact]
    public void Study_WithoutSensors_IsRefusedForBothPurposes()
    {
        string text = StudyText.Small.With("  eeg: {layout: ten-ten-64, reference: average}\n  eeg_derivations: [Cz-mastoids, Cz-M1]\n  meg: {coil: magnetometer}\n", "  sampling_Hz: 10000\n");
        Assert.Contains("neither electrodes nor MEG sensors", StudyText.Problem(text).Message, StringComparison.Ordinal);
        Assert.Contains("neither electrodes nor MEG sensors", StudyText.Problem(text, Purpose.Leadfield).Message, StringComparison.Ordinal);
    }

    [Fact]
    public void Regions_OfTheSameName_AreRefused()
    {
        InputProblem problem = StudyText.Problem(StudyText.Tables.With("name: box", "name: probes").With("[probes, box]", "[probes]"));
        Assert.Equal("regions[1].name", problem.Key);
        Assert.Contains("'probes' stands twice", problem.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void PlanarArray_WithAFlatFigureInFemtotesla_IsRefusedWithTheReason()
    {
        string text = StudyText.Small.With("coil: magnetometer", "coil: planar-gradiometer").With("meg_sensor_fT_per_rtHz: 5", "meg_sensor_fT_rms: 180");
        InputProblem problem = StudyText.Problem(text);
        Assert.Equal("noise.meg_sensor_fT_rms", problem.Key);
        Assert.Contains("fT/cm", problem.Message, StringComparison.Ordinal);
        Assert.Contains("meg_planar_fT_per_cm_rtHz", problem.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void Head_OutsideTheUsualSize_IsRefusedByItsOutermostLayerAlone()
    {
        string text = StudyText.Tables.With("radius_mm: 78", "radius_mm: 0.78").With("radius_mm: 80", "radius_mm: 0.8").With("radius_mm: 86", "radius_mm: 0.86").With("radius_mm: 92", "radius_mm: 0.92");
        InputProblem problem = StudyText.Problem(text);
        Assert.Equal("head.spheres.layers[3].radius_mm", problem.Key);
        Assert.Contains("the head's radius 0.92 mm is far from the usual 45 to 110 mm", problem.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void Head_WithVeryManyLayers_IsRefused()
    {
        string layers = string.Join(", ", Enumerable.Range(1, 51).Select(k => $"{{tissue: t, radius_mm: {k}, conductivity_S_per_m: 0.33}}"));
        InputProblem problem = StudyText.Problem(StudyText.Small.With("preset: adult-4", $"layers: [{layers}]"));
        Assert.Equal("head.spheres.layers", problem.Key);
        Assert.Contains("51 layers; at most 50", problem.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void Assess_WithoutResponses_IsRefused_WhileLeadfieldIsNot()
    {
        string text = StudyText.Small[..StudyText.Small.IndexOf("responses:", StringComparison.Ordinal)];
        Assert.Equal("responses", StudyText.Problem(text).Key);
        Assert.Empty(StudyText.Read(text, Purpose.Leadfield).Study.Responses);
    }

    [Fact]
    public void Leadfield_WithoutAnyRegion_IsRefused()
    {
        string text = StudyText.Small[..StudyText.Small.IndexOf("regions:", StringComparison.Ordinal)];
        InputProblem problem = StudyText.Problem(text, Purpose.Leadfield);
        Assert.Equal("regions", problem.Key);
        Assert.Contains("no response names a region", problem.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void ImportedEeg_WithoutAnArray_IsRefused()
    {
        InputProblem problem = StudyText.Problem(StudyText.Imported.With("eeg: eeg.npy, ", "").With("  eeg_covariance: {file: eeg.npy, samples: 20000, averaged_trials: 1}\n", ""));
        Assert.Equal("sensors.eeg", problem.Key);
        Assert.Contains("no eeg array", problem.Message, StringComparison.Ordinal);
    }
}
