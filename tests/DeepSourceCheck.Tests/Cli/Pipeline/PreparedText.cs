using DeepSourceCheck.Cli.Pipeline;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Core.Studies;
using DeepSourceCheck.Files.Npy;
using DeepSourceCheck.Files.Studies;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Cli.Pipeline;

/// <summary>Small studies through the pipeline, for what it says of them.</summary>
internal sealed class PreparedText : IDisposable
{
    private readonly ScratchFolder _folder = new();

    /// <summary>One dipole, three electrodes' worth of layout, ten magnetometers: fast.</summary>
    public const string Study = """
        title: small
        head: {spheres: {preset: adult-4}}
        sensors:
          eeg: {layout: ten-twenty-21, reference: average}
          meg: {coil: magnetometer, sites: 40, gap_mm: 20}
        noise: {eeg_sensor_uV_rms: 2, meg_sensor_fT_rms: 200}
        regions: [{name: probe, points: points.tsv}]
        responses: [{name: r, regions: [probe], moment_nAm: 10, band_Hz: [1, 100], direction: tangential}]
        protocol: {rate_per_s: 7.3, session_min: 60}
        """;

    /// <summary>Three electrodes and four magnetometers around one point, as imported leadfields.</summary>
    public const string ImportedStudy = """
        title: imported
        head: {leadfields: {eeg: eeg.npy, meg: meg.npy, points: all.tsv, rows: rows.tsv}}
        sensors: {eeg: {reference: none}}
        noise: {eeg_sensor_uV_rms: 2, meg_sensor_fT_rms: 200}
        regions: [{name: probe, points: points.tsv}]
        responses: [{name: r, regions: [probe], moment_nAm: 10, band_Hz: [1, 100], direction: isotropic}]
        """;

    public PreparedText()
    {
        _folder.Write("points.tsv", "name\tx\ty\tz\np\t30\t-20\t30\n");
    }

    public void Dispose() => _folder.Dispose();

    public string At(string name) => _folder.At(name);

    public PreparedText With(string name, string text)
    {
        _folder.Write(name, text);
        return this;
    }

    /// <summary>A matrix as .npy.</summary>
    public PreparedText WithArray(string name, int[] shape, params double[] values)
    {
        NpyWriter.Write(_folder.At(name), shape, values);
        return this;
    }

    /// <summary>Arrays of two points, both usable unless a value is NaN.</summary>
    public PreparedText WithImported(double secondPoint = 1)
    {
        With("all.tsv", "name\tx\ty\tz\np\t30\t-20\t30\nq\t20\t-20\t30\n");
        With("rows.tsv", "row\tmodality\tkind\tunit\n" + string.Concat(Enumerable.Range(1, 3).Select(k => $"E{k}\tEEG\telectrode\tV/(A m)\n"))
            + string.Concat(Enumerable.Range(1, 4).Select(k => $"M{k}\tMEG\tmagnetometer\tT/(A m)\n")));
        WithArray("eeg.npy", [3, 2, 3], [.. Enumerable.Range(0, 18).Select(k => k / 3 % 2 == 1 ? secondPoint * (20 + k) : 30 + 7 * (k % 5) - k)]);
        return WithArray("meg.npy", [4, 2, 3], [.. Enumerable.Range(0, 24).Select(k => (k / 3 % 2 == 1 ? secondPoint : 1) * 1e-7 * (1 + k * k % 7))]);
    }

    /// <summary>A diagonal covariance.</summary>
    public static double[] Diagonal(params double[] variances) => [.. Enumerable.Range(0, variances.Length * variances.Length).Select(k => k % (variances.Length + 1) == 0 ? variances[k / (variances.Length + 1)] : 0)];

    public PreparedStudy Prepare(string study, params (string From, string To)[] changes)
    {
        foreach ((string from, string to) in changes)
        {
            Assert.Contains(from, study, StringComparison.Ordinal);
            study = study.Replace(from, to, StringComparison.Ordinal);
        }

        return StudyPipeline.Prepare(_folder.Write("study.yaml", study), Purpose.Assess, Settings);
    }

    public Assessment Assess(string study, params (string From, string To)[] changes) => StudyPipeline.Assess(Prepare(study, changes), Settings, null);

    /// <summary>Warnings of preparing, which `check` prints too.</summary>
    public IReadOnlyList<string> Warnings(string study, params (string From, string To)[] changes) => Prepare(study, changes).Warnings;

    /// <summary>What the study is refused with.</summary>
    public string Refusal(string study, params (string From, string To)[] changes) => Assert.Throws<InputException>(() => Prepare(study, changes)).Message;

    private static RunSettings Settings { get; } = new(null, new HashSet<string>(), null, CancellationToken.None);
}
