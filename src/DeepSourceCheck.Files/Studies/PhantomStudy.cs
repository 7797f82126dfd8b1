using System.Globalization;
using System.Text;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Heads.Voxels;
using DeepSourceCheck.Core.Heads.Voxels.Phantom;
using DeepSourceCheck.Files.Nifti;

namespace DeepSourceCheck.Files.Studies;

/// <summary>The commented study on an invented head, and the files that belong to it.</summary>
public static class PhantomStudy
{
    /// <summary>The label volume.</summary>
    public const string HeadFile = "phantom-head.nii.gz";

    /// <summary>The regions that fit it.</summary>
    public const string RegionsFile = "phantom-regions.nii.gz";

    /// <summary>What each label of the regions means.</summary>
    public const string ListingFile = "phantom-regions.tsv";

    private static readonly Dictionary<int, string> AdultSources = new()
    {
        [PhantomHead.Scalp] = "common practice, no source; 0.41 as a weighted mean, McCann 2019 (seen)",
        [PhantomHead.CompactBone] = "common practice, no source; 0.005 and 0.007 for outer and inner table, McCann 2019 (seen)",
        [PhantomHead.SpongyBone] = "common practice, no source; 0.016 to 0.041 live samples, Akhtari 2002 (seen)",
        [PhantomHead.Csf] = "Baumann 1997 at body temperature (memory)",
        [PhantomHead.Grey] = "common practice, no source; 0.22 to 0.67 (memory)",
        [PhantomHead.White] = "common practice, no source; 0.09 to 0.29 (memory)",
    };

    private static readonly Dictionary<int, string> NeonateSources = new()
    {
        [PhantomHead.Scalp] = "common practice, no source",
        [PhantomHead.CompactBone] = "a ratio of 10 to the brain; 0.02 to 0.05 (memory), open to a factor of 8",
        [PhantomHead.Csf] = "Baumann 1997 at body temperature (memory)",
        [PhantomHead.Grey] = "common practice, no source",
        [PhantomHead.White] = "as grey: not myelinated yet; common practice, no source",
        [PhantomHead.Fontanelle] = "a membrane that conducts as brain does; common practice, no source",
    };

    /// <summary>Text of the study for a head.</summary>
    public static string Text(PhantomHead head)
    {
        Dictionary<int, string> sources = head.Kind == PhantomKind.Neonate ? NeonateSources : AdultSources;
        var tissues = new StringBuilder();
        foreach (Tissue tissue in PhantomTissues.Of(head.Kind).Where(t => t.Kind != TissueKind.Air))
        {
            string entry = string.Create(CultureInfo.InvariantCulture, $"{{label: {tissue.Label}, tissue: {tissue.Name}, conductivity_S_per_m: {tissue.Conductivity}}}");
            tissues.Append(CultureInfo.InvariantCulture, $"      - {entry,-66} # {sources[tissue.Label]}\n");
        }

        string landmarks = string.Join(", ", head.Landmarks.Select(l => $"{l.Key}: {Millimetres(l.Value)}"));
        string name = head.Kind == PhantomKind.Neonate ? "neonate-phantom-study.yaml" : "phantom-study.yaml";
        return StudyResource.Text(name)
            .Replace("@tissues@\n", tissues.ToString(), StringComparison.Ordinal)
            .Replace("@landmarks@", landmarks, StringComparison.Ordinal)
            .Replace("@thalamus-left@", Label("thalamus-left"), StringComparison.Ordinal)
            .Replace("@thalamus-right@", Label("thalamus-right"), StringComparison.Ordinal)
            .Replace("@inferior-colliculus-left@", Label("inferior-colliculus-left"), StringComparison.Ordinal)
            .Replace("@inferior-colliculus-right@", Label("inferior-colliculus-right"), StringComparison.Ordinal);
    }

    /// <summary>Writes the head, its regions and their listing into a folder.</summary>
    /// <param name="head">The head.</param>
    /// <param name="folder">An existing folder.</param>
    public static void WriteFiles(PhantomHead head, string folder)
    {
        NiftiWriter.Write(Path.Combine(folder, HeadFile), head.Grid, head.Labels, NiftiIntent.Label, "tissues", "Invented head: no person was measured; not for treatment");
        NiftiWriter.Write(Path.Combine(folder, RegionsFile), head.Grid, head.RegionLabels, NiftiIntent.Label, "regions", "Regions of an invented head; see phantom-regions.tsv");
        File.WriteAllText(Path.Combine(folder, ListingFile), Listing(head), new UTF8Encoding(false));
    }

    /// <summary>A table of the regions: label, name, voxels, volume [mL].</summary>
    public static string Listing(PhantomHead head)
    {
        int[] voxels = new int[PhantomHead.Regions.Count + 1];
        foreach (byte label in head.RegionLabels)
        {
            voxels[label]++;
        }

        var text = new StringBuilder("label\tname\tvoxels\tvolume_mL\n");
        foreach (PhantomRegion region in PhantomHead.Regions)
        {
            text.Append(CultureInfo.InvariantCulture, $"{region.Label}\t{region.Name}\t{voxels[region.Label]}\t{voxels[region.Label] * head.Grid.VoxelVolume * 1e6:0.###}\n");
        }

        return text.ToString();
    }

    private static string Label(string region) => PhantomHead.Regions.Single(r => r.Name == region).Label.ToString(CultureInfo.InvariantCulture);

    private static string Millimetres(Vec3 place) => string.Create(CultureInfo.InvariantCulture, $"[{1000 * place.X:0.0}, {1000 * place.Y:0.0}, {1000 * place.Z:0.0}]")
        .Replace("-0.0", "0.0", StringComparison.Ordinal);
}
