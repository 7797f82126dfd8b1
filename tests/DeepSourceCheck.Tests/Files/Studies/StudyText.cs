using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Files.Studies;

namespace DeepSourceCheck.Tests.Files.Studies;

/// <summary>Studies as text for the tests: edits that must hit, and the files that studies name.</summary>
internal static class StudyText
{
    /// <summary>A small study of both modalities: densities only.</summary>
    public const string Small =
        """
        title: small
        head: {spheres: {preset: adult-4}}
        sensors:
          eeg: {layout: ten-ten-64, reference: average}
          eeg_derivations: [Cz-mastoids, Cz-M1]
          meg: {coil: magnetometer}
        noise:
          eeg_sensor_nV_per_rtHz: 20
          meg_sensor_fT_per_rtHz: 5
          brain: default
        regions:
          - {name: nucleus, ellipsoid: {centre_mm: [10, -38, -20], semi_axes_mm: [4, 3, 2]}, spacing_mm: 1.0}
        responses:
          - name: wave V
            regions: [pons, nucleus]
            moment_nAm: 3.5
            band_Hz: [100, 1500]
            direction: tangential
        target: {amplitude_ratio: 3}
        protocol: {rate_per_s: 11.1}
        """;

    /// <summary>Own layers, tables of sensors, a mask and points, flat noise.</summary>
    public const string Tables =
        """
        title: tables
        head:
          spheres:
            centre_mm: [0, -18, 5]
            layers:
              - {tissue: brain, radius_mm: 78, conductivity_S_per_m: 0.33}
              - {tissue: csf, radius_mm: 80, conductivity_S_per_m: 1.79}
              - {tissue: skull, radius_mm: 86, radial_S_per_m: 0.0132, tangential_S_per_m: 0.03}
              - {tissue: scalp, radius_mm: 92, conductivity_S_per_m: 0.43}
        sensors:
          eeg: {electrodes: electrodes.tsv, coordinates: coordsystem.json, reference: [M1, M2]}
          meg: {coils: coils.tsv}
        noise: {eeg_sensor_uV_rms: 8, meg_sensor_fT_rms: 200}
        regions:
          - {name: probes, points: points.tsv}
          - {name: box, mask: mask.nii.gz, label: 1}
        responses:
          - {name: slow, regions: [probes, box], moment_nAm: 10, band_Hz: [1, 40], direction: [0, 3, 4]}
        """;

    /// <summary>Imported leadfields with measured covariances.</summary>
    public const string Imported =
        """
        title: imported
        head: {leadfields: {eeg: eeg.npy, meg: meg.npy, points: points.tsv, rows: rows.tsv}}
        sensors:
          eeg: {reference: none}
        regions:
          - {name: some, points: points.tsv}
        noise:
          eeg_covariance: {file: eeg.npy, samples: 20000, averaged_trials: 1}
          meg_covariance: meg.npy
        responses:
          - {name: slow, regions: [some], moment_nAm: 10, band_Hz: [1, 40], direction: [1, 0, 0]}
        """;

    /// <summary>The library's names, as the study file's page lists them.</summary>
    public static IReadOnlyList<string> Library { get; } =
    [
        .. new[]
        {
            "thalamus", "ventral-posterolateral-thalamus", "medial-geniculate", "lateral-geniculate", "caudate", "putamen", "pallidum", "accumbens", "hippocampus", "amygdala",
            "subthalamic-nucleus", "substantia-nigra", "red-nucleus", "inferior-colliculus", "superior-colliculus", "cochlear-nucleus", "superior-olive", "lateral-lemniscus",
            "cuneate-nucleus", "cerebellum",
        }.SelectMany(name => new[] { name + "-left", name + "-right" }),
        "midbrain", "pons", "medulla", "cortex",
    ];

    /// <summary>A folder that holds every file that the studies name; their content is not read here.</summary>
    public static string Folder { get; } = MakeFolder();

    /// <summary>The text with one place replaced; fails when the place is not there.</summary>
    public static string With(this string text, string place, string replacement)
    {
        Assert.Contains(place, text, StringComparison.Ordinal);
        int at = text.IndexOf(place, StringComparison.Ordinal);
        return text[..at] + replacement + text[(at + place.Length)..];
    }

    public static StudyReading Read(string text, Purpose purpose = Purpose.Assess) => StudyReader.ReadText(text, "study.yaml", Folder, purpose, Library);

    /// <summary>The problems of a text that must be refused.</summary>
    public static IReadOnlyList<InputProblem> Problems(string text, Purpose purpose = Purpose.Assess) =>
        Assert.Throws<InputException>(() => Read(text, purpose)).Problems;

    /// <summary>The one problem of a text that must be refused.</summary>
    public static InputProblem Problem(string text, Purpose purpose = Purpose.Assess)
    {
        IReadOnlyList<InputProblem> problems = Problems(text, purpose);
        Assert.True(problems.Count == 1, $"expected one problem, got:\n{string.Join('\n', problems)}");
        return problems[0];
    }

    private static string MakeFolder()
    {
        string folder = Directory.CreateTempSubdirectory("dsc-study-").FullName;
        foreach (string name in new[] { "electrodes.tsv", "coordsystem.json", "coils.tsv", "points.tsv", "rows.tsv", "mask.nii.gz", "head.nii.gz", "tensors.nii.gz", "eeg.npy", "meg.npy" })
        {
            File.WriteAllText(Path.Combine(folder, name), "");
        }

        AppDomain.CurrentDomain.ProcessExit += (_, _) => Directory.Delete(folder, recursive: true);
        return folder;
    }
}
