using System.Globalization;

using DeepSourceCheck.Core.Geometry;
using DeepSourceCheck.Core.Regions;
using DeepSourceCheck.Core.Units;
using DeepSourceCheck.Files.Nifti;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Files.Nifti;

/// <summary>Every volume of the Debian package mricron-data against an independent reader (python3-nibabel, run as a process of its own).</summary>
public sealed class AtlasVolumesTests
{
    private const string Templates = "/usr/share/mricron/templates";
    private const string Python = "/usr/bin/python3";
    private const string Library = "/usr/lib/python3/dist-packages/nibabel";
    private const string Need = "apt-get install mricron-data python3-nibabel";

    /// <summary>Printed with 9 decimals; sums of single-precision millimetres.</summary>
    private const double CentroidTolerance = 1e-4;

    /// <summary>Relative; affine maps in single precision.</summary>
    private const double VolumeTolerance = 1e-5;

    // One line a label: file, label, voxels, mL, centroid mm. Fractional volumes: one region of at least 0.5, label 1.
    private const string Script = """
        import glob, os, sys
        import nibabel, numpy
        for path in sorted(glob.glob(sys.argv[1] + '/*.nii.gz')):
            image = nibabel.load(path)
            data = numpy.asanyarray(image.dataobj)
            volume = abs(numpy.linalg.det(image.affine[:3, :3])) / 1000
            if not numpy.array_equal(data, numpy.round(data)):
                data = (data >= 0.5).astype(numpy.uint8)
            flat = data.reshape(-1, order='F').astype(numpy.int32)
            keep = numpy.flatnonzero(flat)
            which = flat[keep]
            n = numpy.bincount(which)
            labels = numpy.flatnonzero(n)
            nx, ny, nz = data.shape
            ijk = [keep % nx, keep // nx % ny, keep // nx // ny]
            n = n[labels]
            mean = numpy.array([numpy.bincount(which, weights=a)[labels] / n for a in ijk])
            xyz = image.affine[:3, :3] @ mean + image.affine[:3, 3:]
            for k, label in enumerate(labels):
                print(os.path.basename(path), label, n[k], '%.9f %.9f %.9f %.9f' % (n[k] * volume, *xyz[:, k]))
        """;

    [FactIfPresent(Need, Templates, Python, Library)]
    public void EveryLabelOfEveryVolume_HasTheVoxelsVolumeAndCentroidOfAnIndependentReader()
    {
        string[][] lines = [.. ProcessText.Of(Python, "-c", Script, Templates).Split('\n', StringSplitOptions.RemoveEmptyEntries).Select(l => l.Split(' '))];
        string[] files = [.. Directory.GetFiles(Templates, "*.nii.gz").Order(StringComparer.Ordinal).Select(f => Path.GetFileName(f)!)];
        Assert.True(files.Length >= 13, $"{files.Length} volumes");
        Assert.Equal(files, lines.Select(l => l[0]).Distinct());
        foreach (IGrouping<string, string[]> expected in lines.GroupBy(l => l[0]))
        {
            IReadOnlyList<LabelEntry> labels = MaskFile.List(Path.Combine(Templates, expected.Key), expected.Key).Labels;
            Assert.Equal(expected.Select(l => long.Parse(l[1], CultureInfo.InvariantCulture)), labels.Select(l => l.Label));
            foreach ((string[] line, LabelEntry entry) in expected.Zip(labels))
            {
                double[] numbers = [.. line.Skip(2).Select(t => double.Parse(t, CultureInfo.InvariantCulture))];
                string what = $"{expected.Key} label {entry.Label}";
                Assert.True(numbers[0] == entry.Voxels, $"{what}: {entry.Voxels} voxels, {numbers[0]} expected");
                RelativeAssert.Equal(numbers[1], Si.ToMillilitres(entry.Volume), VolumeTolerance, what);
                Vec3 mm = 1000 * entry.Centroid;
                Assert.True((mm - new Vec3(numbers[2], numbers[3], numbers[4])).Norm < CentroidTolerance, $"{what}: centroid {mm}");
            }
        }
    }

    // Volumes [mL] of the atlas in that package's aal.nii.gz; the tolerance is half a unit of the last stated digit.
    [FactIfPresent(Need, Templates)]
    public void DeepStructures_HaveTheirKnownVolumesAndSides()
    {
        IReadOnlyList<LabelEntry> labels = MaskFile.List(Path.Combine(Templates, "aal.nii.gz"), "aal.nii.gz").Labels;
        foreach ((int label, double millilitres) in new[] { (77, 8.7), (78, 8.4), (73, 7.9), (74, 8.5), (37, 7.5), (38, 7.6), (41, 1.7), (42, 2.0) })
        {
            LabelEntry entry = labels.Single(l => l.Label == label);
            Assert.InRange(Si.ToMillilitres(entry.Volume), millilitres - 0.05, millilitres + 0.05);
            Assert.Equal(label % 2 == 1 ? "left" : "right", entry.Side);
        }
    }

    [FactIfPresent(Need, Templates)]
    public void MaskOfThalamus_ContainsItsCentroidAndNothingOfTheOtherSide()
    {
        (VoxelMask mask, IReadOnlyList<string> warnings) = MaskFile.Read(Path.Combine(Templates, "aal.nii.gz"), "aal.nii.gz", 77, null);
        Assert.True(mask.Contains(mask.Centroid));
        Assert.False(mask.Contains(mask.Centroid with { X = -mask.Centroid.X }));
        Assert.True(mask.WorldBounds.High.X < 0.002 && mask.WorldBounds.Low.X > -0.03);
        Assert.DoesNotContain(warnings, w => w.Contains("orientation", StringComparison.Ordinal));
    }

    // Counted with the independent reader: files with both codes above 0 whose two maps differ by 2 mm or more; in ch2better both agree.
    [FactIfPresent(Need, Templates)]
    public void DisagreeingQform_IsSaid()
    {
        string[] said = [.. Directory.GetFiles(Templates, "*.nii.gz").Order(StringComparer.Ordinal)
            .Where(f => NiftiReader.ReadHeader(f, f).Warnings.Any(w => w.Contains("disagree", StringComparison.Ordinal))).Select(f => Path.GetFileName(f).Split('.')[0])];
        Assert.Equal(
            ["AICHAmc", "HarvardOxford-cort-maxprob-thr0-1mm", "JHU-WhiteMatter-labels-1mm", "JHU-WhiteMatter-labels-2mm", "inia19-NeuroMaps", "jhu189", "natbrainlab"], said);
    }
}
