using System.Text.Json;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads.Voxels;

namespace DeepSourceCheck.Examples;

/// <summary>The numbered studies on a labelled head, which `new --head phantom` draws at 3 mm: coarse, so that they run in seconds. Comparisons between heads, no figure of a person.</summary>
public class VoxelStudyTests(PhantomFolder folder) : IClassFixture<PhantomFolder>
{
    private const string Tissues = "08-tissues.yaml", Lesions = "09-lesions.yaml";

    /// <summary>Response and region of study 08.</summary>
    public static TheoryData<string, string> Regions => new() { { "deep source", "thalamus" }, { "deep source", "colliculus" }, { "cortical source", "cortex" } };

    [Theory]
    [MemberData(nameof(Regions))]
    public void Study08_LeavingOutTheFluidRaisesEeg_AndMovesMegLess(string response, string region)
    {
        // EEG is overestimated without fluid and MEG hardly moves: common practice, no source; for EEG also Ramon and others 2004, Wendel and others 2008 (both from memory).
        // Measured, channel-mean over all directions, four tissues to three: EEG +3.0, +3.0, +3.6 dB; MEG -2.1, +0.4, -0.7 dB (thalamus, colliculus, cortex).
        // MEG of the thalamus moves by decibels too: filling only the fluid within 40 mm of it gives -0.8 dB, only that farther out -1.2 dB. DEVELOPERS.md has the figures at 2 mm.
        AssessedStudy study = folder.Assessed(Tissues);
        AssessedStudy four = study.Variant("four tissues"), three = study.Variant("three tissues");
        double eeg = Db(three, "EEG") - Db(four, "EEG"), meg = Db(three, "MEG") - Db(four, "MEG");
        Assert.InRange(eeg, 1, 10);
        Assert.InRange(Math.Abs(meg), 0, eeg);

        double Db(AssessedStudy s, string modality) => AssessedStudy.SnrDb(s.Result(response, region, modality, "isotropic", "channel-mean"));
    }

    [Fact]
    public void Study08_OverCortexMegMovesByLessThanHalfOfWhatEegDoes()
    {
        AssessedStudy study = folder.Assessed(Tissues);
        Assert.InRange(Math.Abs(Moved("MEG")), 0, Moved("EEG") / 2);

        double Moved(string modality) => Db(study.Variant("three tissues"), modality) - Db(study.Variant("four tissues"), modality);
        static double Db(AssessedStudy s, string modality) => AssessedStudy.SnrDb(s.Result("cortical source", "cortex", modality, "isotropic", "channel-mean"));
    }

    [Fact]
    public void Study08_EveryHeadHasTheSameDipoles()
    {
        AssessedStudy study = folder.Assessed(Tissues);
        foreach (object[] row in Regions)
        {
            int[] dipoles = [.. new[] { study, study.Variant("four tissues"), study.Variant("three tissues") }.Select(s => s.Region((string)row[0], (string)row[1]).GetProperty("dipoles").GetInt32())];
            Assert.Single(dipoles.Distinct());
        }
    }

    [Fact]
    public void Study08_TheLeastVisibleDirectionOfCortexIsWeak_ButNoRealHeadIsSilent()
    {
        // Weakest over strongest direction of MEG over cortex: median 0.06 (Ahlfors and others 2010, abstract seen), 0 in a sphere. Here 0.027; a smooth head lies nearer to a sphere than a person's.
        JsonElement ratio = folder.Assessed(Tissues).Region("cortical source", "cortex").GetProperty("split").GetProperty("weakest_over_strongest");
        Assert.InRange(ratio.GetProperty("p50").GetDouble(), 0.01, 0.12);
        Assert.All(folder.Assessed(Tissues).Rows("deep source", "thalamus"), row => Assert.NotEqual(JsonValueKind.Null, row.GetProperty("snr_db").GetProperty("p50").ValueKind));
    }

    [Fact]
    public void Study08_SaysHowItsLeadfieldsCameAbout_AndWhereItsArrayLies()
    {
        JsonElement root = folder.Assessed(Tissues).Root;
        Assert.Contains("relative residual of at most", root.GetProperty("leadfields").GetProperty("details").GetString(), StringComparison.Ordinal);
        string[] limits = [.. root.GetProperty("limits").EnumerateArray().Select(l => l.GetString()!)];
        Assert.Contains(limits, l => l.StartsWith("MEG helmet: ", StringComparison.Ordinal) && l.Contains("median", StringComparison.Ordinal));
        Assert.Contains(limits, l => l.Contains("voxels, here of 3 mm", StringComparison.Ordinal));
        Assert.DoesNotContain(limits, l => l.Contains("imported", StringComparison.Ordinal) || l.Contains("concentric", StringComparison.Ordinal));
        Assert.Contains("MEG helmet: ", folder.Printed("check", Tissues), StringComparison.Ordinal);
    }

    [Fact]
    public void Study09_AnOpeningOfTheSkullRaisesEegBelowIt_AndIsReported()
    {
        // Over a defect of the skull EEG grows, up to some three times in amplitude (breach rhythm; Cobb and others 1979, from memory). 20 mm across, source some 25 mm below: by decibels, and a far deep source less.
        AssessedStudy study = Lesion(), opened = study.Variant("opening of the skull");
        Assert.InRange(Moved(opened, "below-opening", "EEG"), 0.5, 20 * Math.Log10(5));
        Assert.InRange(Math.Abs(Moved(opened, "thalamus", "EEG")), 0, Moved(opened, "below-opening", "EEG"));
        Assert.InRange(Math.Abs(Moved(opened, "below-opening", "MEG")), 0, Moved(opened, "below-opening", "EEG"));
        Assert.Contains(Warnings("opening of the skull"), w => w.Contains("leak: scalp touches csf", StringComparison.Ordinal));
    }

    [Fact]
    public void Study09_NoSourceStandsInACavity()
    {
        AssessedStudy study = Lesion();
        JsonElement whole = study.Region("response", "below-opening"), left = study.Variant("cavity").Region("response", "below-opening");
        Assert.True(left.GetProperty("dipoles").GetInt32() < whole.GetProperty("dipoles").GetInt32());
        Assert.Contains(Warnings("cavity"), w => w.StartsWith("below-opening: ", StringComparison.Ordinal) && w.Contains("fell into csf", StringComparison.Ordinal));
        Assert.Equal(study.Region("response", "thalamus").GetProperty("dipoles").GetInt32(), study.Variant("cavity").Region("response", "thalamus").GetProperty("dipoles").GetInt32());
    }

    private AssessedStudy Lesion()
    {
        // An opening 40 mm across below C3; a ball of 12 mm radius beside the source.
        Vec3 centre = new(0, -0.018, 0.005), outward = (new Vec3(-0.037, -0.024, 0.045) - centre).Unit(), cavity = new(-0.030, -0.024, 0.036);
        folder.Mask("opening.nii.gz", (at, kind) => kind == TissueKind.Skull && Vec3.Dot(at - centre, outward) > 0
            && (at - centre - Vec3.Dot(at - centre, outward) * outward).Norm < 0.020);
        folder.Mask("cavity.nii.gz", (at, kind) => kind is TissueKind.Grey or TissueKind.White && (at - cavity).Norm < 0.012);
        return folder.Assessed(Lesions);
    }

    private IEnumerable<string> Warnings(string variant) => folder.Assessed(Lesions).Root.GetProperty("variants").EnumerateArray()
        .Single(v => v.GetProperty("name").GetString() == variant).GetProperty("warnings").EnumerateArray().Select(w => w.GetString()!);

    private double Moved(AssessedStudy variant, string region, string modality) => Db(variant, region, modality) - Db(folder.Assessed(Lesions), region, modality);

    private static double Db(AssessedStudy study, string region, string modality) => AssessedStudy.SnrDb(study.Result("response", region, modality, "isotropic", "best-channel"));
}
