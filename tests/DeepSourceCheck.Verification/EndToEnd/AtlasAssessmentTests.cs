using System.Text.Json;

using DeepSourceCheck.Cli.Pipeline;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Report.Tables;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Verification.EndToEnd;

/// <summary>The whole job on real label volumes: thalamus and hippocampus of the Debian package mricron-data.</summary>
public class AtlasAssessmentTests
{
    private const string Atlas = "/usr/share/mricron/templates/aal.nii.gz";
    private const string Need = "apt-get install mricron-data";

    /// <summary>Every second voxel along each axis of a mask of 1 mm: the left thalamus has 8,700 voxels and 1,056 nodes, 2.9 % less volume (counted apart from this program).</summary>
    private const double VolumeTolerance = 0.03;

    /// <summary>Half a unit of the last digit given [mL].</summary>
    private const double TwoDigits = 0.05;

    private static readonly (string Name, int Label, double Millilitres)[] Masks =
        [("thalamus-by-atlas-left", 77, 8.7), ("thalamus-by-atlas-right", 78, 8.4), ("hippocampus-by-atlas-left", 37, 7.5), ("hippocampus-by-atlas-right", 38, 7.6)];

    private static string Study(string regions, string names) => WholeChain.Changed(Files.Studies.DefaultStudy.Text,
        ("[inferior-colliculus-left, inferior-colliculus-right]", names), ("responses:", regions + "\nresponses:"), ("direction: [0, 0, 1]", "direction: tangential"));

    [FactIfPresent(Need, Atlas)]
    public void ThalamusAndHippocampusMasks_GiveTheWholeAnswer()
    {
        // Volumes: 8.7, 8.4, 7.5 and 7.6 mL by an independent reader (nibabel) on the same labels.
        WholeChain run = WholeChain.Run(Study(Regions(""), $"[{string.Join(", ", Masks.Select(m => m.Name))}]"));
        using JsonDocument json = JsonDocument.Parse(AssessmentJson.Bytes(run.Assessment));
        JsonElement regions = json.RootElement.GetProperty("responses")[0].GetProperty("regions");
        Assert.Equal(Masks.Length, regions.GetArrayLength());
        for (int k = 0; k < Masks.Length; k++)
        {
            JsonElement region = regions[k];
            Assert.Equal(Masks[k].Name, region.GetProperty("region").GetString());
            double volume = region.GetProperty("volume_mL").GetDouble();
            Assert.InRange(volume / Masks[k].Millilitres, 1 - VolumeTolerance, 1 + VolumeTolerance);
            Assert.Equal(2.0, region.GetProperty("spacing_mm").GetDouble(), 0.0);
            Assert.Equal(volume, region.GetProperty("dipoles").GetInt32() * 0.008, 1e-9);
            Assert.Equal(0, region.GetProperty("dropped").GetInt32());
            CheckRegion(region);
        }

        // The thalamus lies about 12 mm from the centre, the hippocampus about 33: MEG prefers the latter, EEG hardly cares.
        double Thalamus(Modality m, string measure) => run.Db(m, DirectionName.Tangential, measure);
        double Hippocampus(Modality m, string measure) => run.Db(m, DirectionName.Tangential, measure, 0, 2);
        Assert.InRange(Hippocampus(Modality.Meg, Names.BestChannel) - Thalamus(Modality.Meg, Names.BestChannel), 5, 15);
        Assert.InRange(Math.Abs(Hippocampus(Modality.Eeg, Names.BestChannel) - Thalamus(Modality.Eeg, Names.BestChannel)), 0, 3);
        Assert.Contains(run.Region().Warnings, w => w.Contains("mm from the sphere's centre", StringComparison.Ordinal));
        Assert.Equal(2, run.Assessment.Inputs.Count);
        Assert.DoesNotContain(run.Assessment.Warnings, w => w.Contains("check the label", StringComparison.Ordinal));
    }

    [FactIfPresent(Need, Atlas)]
    public void MasksAtTheirOwnResolution_HaveTheVolumesOfAnIndependentReader()
    {
        using ScratchFolder folder = new();
        PreparedStudy prepared = StudyPipeline.Prepare(folder.Write("study.yaml", Study(Regions(", spacing_mm: 1"), $"[{string.Join(", ", Masks.Select(m => m.Name))}]")), Files.Studies.Purpose.Assess, WholeChain.Settings);
        foreach ((string name, _, double millilitres) in Masks)
        {
            Assert.InRange(prepared.Setup.Region(name).Volume!.Value * 1e6, millilitres - TwoDigits, millilitres + TwoDigits);
        }

        Assert.Equal([8700, 8399, 7469, 7606], prepared.Regions.Select(r => r.Dipoles));      // voxels of 1 mm3, counted in the file apart from this program
    }

    private static string Regions(string more) => $"regions: [{string.Join(", ", Masks.Select(m => $"{{name: {m.Name}, mask: {Atlas}, label: {m.Label}{more}}}"))}]";

    [FactIfPresent(Need, Atlas)]
    public void MaskNamedForTheOtherSide_IsSaid()
    {
        WholeChain run = WholeChain.Run(Study($"regions: [{{name: nucleus-right, mask: {Atlas}, label: 77}}]", "[nucleus-right]"));
        Assert.Contains(run.Assessment.Warnings, w => w.StartsWith("nucleus-right: its centroid lies on the left", StringComparison.Ordinal));
    }

    private static void CheckRegion(JsonElement region)
    {
        JsonElement split = region.GetProperty("split");
        Assert.True(split.GetProperty("weakest_over_strongest").GetProperty("p95").GetDouble() < 1e-6, "sphere");
        Assert.True(split.GetProperty("angle_to_radial_deg").GetProperty("p95").GetDouble() < 1e-3, "sphere");
        Assert.Equal(JsonValueKind.Number, split.GetProperty("undefined_dipoles").ValueKind);
        HashSet<string> seen = [];
        foreach (JsonElement row in region.GetProperty("results").EnumerateArray())
        {
            string what = string.Join(' ', new[] { "modality", "direction", "measure" }.Select(key => row.GetProperty(key).GetString()));
            seen.Add(what);
            JsonElement snr = row.GetProperty("snr_db");
            double?[] decibels = [.. Percents.Select(p => Number(snr.GetProperty(p)))];
            bool silent = decibels[2] is null;
            Assert.Equal(what.StartsWith("MEG quasi-radial", StringComparison.Ordinal), silent);
            JsonElement target = row.GetProperty("targets")[0];
            Assert.Equal("amplitude_ratio", target.GetProperty("rule").GetString());
            double?[] trials = [.. Percents.Select(p => Number(target.GetProperty("trials").GetProperty(p)))], minutes = [.. Percents.Select(p => Number(target.GetProperty("minutes").GetProperty(p)))];
            if (silent)
            {
                Assert.Null(trials[2]);
                Assert.False(string.IsNullOrEmpty(row.GetProperty("reason").GetString()), what);
                Assert.Equal(JsonValueKind.Object, row.GetProperty("at_leak").ValueKind);
                continue;
            }

            Assert.True(decibels.Zip(decibels.Skip(1)).All(p => p.First <= p.Second), what);
            Assert.True(trials.Zip(trials.Skip(1)).All(p => p.First <= p.Second), what);
            Assert.InRange(decibels[2]!.Value, -70, 10);
            Assert.True(trials[0] >= 1 && trials[0] % 1 == 0, what);
            Assert.InRange(minutes[2]!.Value / (trials[2]!.Value / (60 * 11.1 * 0.9)), 1 - 1e-12, 1 + 1e-12);
            Assert.True(target.GetProperty("smallest_nAm").GetDouble() > 0, what);
            JsonElement peak = row.GetProperty("peak_amplitude");
            if (what.StartsWith("EEG+MEG", StringComparison.Ordinal))
            {
                Assert.Equal(JsonValueKind.Null, peak.ValueKind);
            }
            else
            {
                Assert.True(peak.GetProperty("value").GetDouble() > 0 && peak.GetProperty("channel").GetString()!.Length > 0, what);
                Assert.Equal(what.StartsWith("EEG", StringComparison.Ordinal) ? "uV" : "fT", peak.GetProperty("unit").GetString());
            }
        }

        // Five directions; EEG: three measures and a derivation, MEG three, both two.
        Assert.Equal(5 * (4 + 3 + 2), seen.Count);
        foreach (JsonElement verdict in region.GetProperty("verdicts").EnumerateArray())
        {
            Assert.False(string.IsNullOrWhiteSpace(verdict.GetProperty("text").GetString()));
            Assert.Equal("amplitude_ratio", verdict.GetProperty("rule").GetString());
            Assert.Contains(verdict.GetProperty("fits_session").ValueKind, new[] { JsonValueKind.True, JsonValueKind.False });
            Assert.Equal(JsonValueKind.Null, verdict.GetProperty("assurance").ValueKind);
        }

        Assert.Equal(["EEG", "MEG", "EEG+MEG"], region.GetProperty("verdicts").EnumerateArray().Select(v => v.GetProperty("modality").GetString()));
    }

    private static readonly string[] Percents = ["p05", "p25", "p50", "p75", "p95"];

    private static double? Number(JsonElement e) => e.ValueKind == JsonValueKind.Null ? null : e.GetDouble();
}
