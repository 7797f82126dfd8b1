using System.Globalization;
using System.Text.RegularExpressions;

using DeepSourceCheck.Cli;
using DeepSourceCheck.Core.Results;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Cli;

/// <summary>What a reviewer does with `why`: reads the printed text, nothing else, and recomputes the count by hand.</summary>
public sealed partial class WhyArithmeticTests : IDisposable
{
    private const int Columns = 80;

    private readonly string _folder = Directory.CreateTempSubdirectory("dsc-why-").FullName;

    public void Dispose() => Directory.Delete(_folder, recursive: true);

    [Fact]
    public void Why_OnTheDefaultStudy_RecomputesEveryCountFromThePrintedText()
    {
        IReadOnlyList<PrintedChain> chains = Chains(Print("why"));
        Assert.Equal(["EEG", "MEG", "EEG and MEG together"], chains.Select(c => c.Heading[..c.Heading.IndexOf(':', StringComparison.Ordinal)]));
        Assert.All(chains, Recomputes);
    }

    [Theory]
    // Each changes which lines stand in the chain: the convention's noise, the rule, the direction, the measure, the shared session.
    [InlineData("measured: baseline-to-peak", "measured: peak-to-trough")]
    [InlineData("target: {amplitude_ratio: 3}", "target: {amplitude_ratio: 2.5, detection: {alpha: 0.01, power: 0.9, looks: 28}}")]
    [InlineData("direction: [0, 0, 1]", "direction: isotropic")]
    [InlineData("direction: [0, 0, 1]", "direction: best")]
    [InlineData("direction: [0, 0, 1]", "direction: tangential\n    locked_artefact: {eeg_uV: 0.01, meg_fT: 0.1}")]
    [InlineData("direction: [0, 0, 1]", "direction: [1, 2, 2]\n    measure: {eeg: matched-filter, meg: matched-filter}")]
    [InlineData("direction: [0, 0, 1]", "direction: tangential\n    competitors: [{region: medial-geniculate-left, moment_nAm: 20}]")]
    [InlineData("session_min: 40}", "session_min: 40, conditions: 2, replications: 3, breaks_min: 5, preparation_min: 30}")]
    [InlineData("target: {amplitude_ratio: 3}", "target: {detection: {topography: plane, looks: 3}}")]
    [InlineData("target: {amplitude_ratio: 3}", "target: {detection: {covariance: estimated}}")]
    [InlineData("target: {amplitude_ratio: 3}", "target: {detection: {topography: plane, covariance: estimated}}")]
    [InlineData("target: {amplitude_ratio: 3}", "target: {detection: {topography: unknown, covariance: estimated}}")]
    [InlineData("target: {amplitude_ratio: 3}", "target: {variance_ratio: {alpha: 0.01, power: 0.9, window_rms_uV: 0.05}}")]
    [InlineData("target: {amplitude_ratio: 3}", "target: {variance_ratio: {window_rms_uV: 0.05}}")]
    public void Why_OnAChangedStudy_RecomputesEveryCountFromThePrintedText(string from, string to)
    {
        string written = EmbeddedStudy.Replace("\r", "", StringComparison.Ordinal);
        Assert.Contains(from, written, StringComparison.Ordinal);
        string file = Path.Combine(_folder, "study.yaml");
        File.WriteAllText(file, written.Replace(from, to, StringComparison.Ordinal));
        IReadOnlyList<PrintedChain> chains = Chains(Print("why", file));
        Assert.True(chains.Count >= 3, "EEG, MEG and both");
        Assert.All(chains, Recomputes);
    }

    [Fact]
    public void Why_OnAHeadOfVoxels_RecomputesEveryCount_AndNamesTheFiniteElements()
    {
        // A layered sphere in voxels of 8 mm: the arithmetic and the words are those of any head.
        File.WriteAllBytes(Path.Combine(_folder, "head.nii"), SphereVolumes.Of(0.008).File());
        string file = Path.Combine(_folder, "study.yaml");
        File.WriteAllText(file,
            """
            title: voxels
            head:
              voxels:
                labels: head.nii
                tissues:
                  - {label: 1, tissue: scalp, conductivity_S_per_m: 0.43}
                  - {label: 2, tissue: skull, conductivity_S_per_m: 0.0132}
                  - {label: 3, tissue: csf, conductivity_S_per_m: 1.79}
                  - {label: 4, tissue: brain, conductivity_S_per_m: 0.33}
                landmarks_mm: {Nz: [0, 84.7, -35.9], Iz: [0, -89.3, -22.3], LPA: [-78, 0, -48.8], RPA: [78, 0, -48.8]}
            sensors:
              eeg: {layout: ten-twenty-21, reference: average}
              eeg_derivations: [Cz-mastoids]
              meg: {coil: magnetometer, sites: 40, gap_mm: 20}
            noise: {eeg_sensor_uV_rms: 2, meg_sensor_fT_rms: 200}
            regions: [{name: core, spacing_mm: 6, ellipsoid: {centre_mm: [12, -20, 10], semi_axes_mm: [9, 9, 9]}}]
            responses: [{name: r, regions: [core], moment_nAm: 10, band_Hz: [1, 40], direction: tangential}]
            target: {amplitude_ratio: 3}
            protocol: {rate_per_s: 4, rejected_fraction: 0.1, session_min: 40}
            """);
        string text = Print("why", file, "--cache", Path.Combine(_folder, "cache"));
        IReadOnlyList<PrintedChain> chains = Chains(text);
        Assert.Equal(3, chains.Count);
        Assert.All(chains, Recomputes);
        string line = text.Replace("\n          ", " ", StringComparison.Ordinal).Replace('\n', ' ');
        Assert.Matches(@"Leadfields: finite elements on [\d,]+ voxels of 8 mm, nodes at borders of tissues moved by a third of a voxel \(Wolters et al\. 2007\); a dipole is a set of monopoles .* relative residual of at most \d\.\de-\d+ in at most \d+ iterations\.", line);
        Assert.Contains("EEG leadfield: transfer rows of trilinear finite elements, Weinstein et al. 2000, Gencer and Acar 2004", line, StringComparison.Ordinal);
        Assert.Contains("MEG leadfield: field of the dipole itself (Biot-Savart) and transfer rows", line, StringComparison.Ordinal);
        Assert.DoesNotContain("Sarvas", text, StringComparison.Ordinal);
        Assert.Equal(text, Print("why", file, "--cache", Path.Combine(_folder, "cache")));

        File.WriteAllText(file, File.ReadAllText(file).Replace("    labels: head.nii\n", "    labels: head.nii\n    grid: plain\n    dipole_load: element-gradient\n", StringComparison.Ordinal));
        line = Print("why", file, "--cache", Path.Combine(_folder, "cache")).Replace('\n', ' ');
        Assert.Contains("nodes at the corners of the voxels; a dipole is the gradient of the shape functions of its element (partial integration: Yan et al. 1991)", line, StringComparison.Ordinal);
    }

    private static void Recomputes(PrintedChain chain)
    {
        Dictionary<string, double> values = ChainArithmetic.Recompute(chain.Lines);
        Assert.True(values.ContainsKey("a") && values.ContainsKey("T"), $"{chain.Heading}: from the moment a to the minutes T");
        Match said = Trials().Match(chain.Verdict);
        Assert.True(said.Success, chain.Verdict);
        Assert.Equal(double.Parse(said.Groups[1].Value, NumberStyles.AllowThousands, CultureInfo.InvariantCulture), values["N"]);
        Assert.Equal(chain.Lines.Single(l => l.Symbol == "N").Value, values["N"]);
    }

    private static string EmbeddedStudy { get; } = File.ReadAllText(Path.Combine(Root(), "tests", "DeepSourceCheck.Examples", "Studies", "01-click-response.yaml"));

    private static string Root()
    {
        string? folder = AppContext.BaseDirectory;
        while (folder is not null && !File.Exists(Path.Combine(folder, "DeepSourceCheck.sln")))
        {
            folder = Path.GetDirectoryName(folder);
        }

        return folder ?? throw new InvalidOperationException("no DeepSourceCheck.sln above the tests");
    }

    private static string Print(params string[] arguments)
    {
        using var output = new StringWriter { NewLine = "\n" };
        using var error = new StringWriter { NewLine = "\n" };
        int status = CommandLine.Run(arguments, new Surroundings { Out = output, Error = error });
        Assert.True(status == ExitStatus.Done, error.ToString());
        string text = output.ToString();
        Assert.All(text.Split('\n'), line => Assert.True(line.Length < Columns && line == line.TrimEnd(), $"'{line}'"));
        return text;
    }

    /// <summary>The text's own rules: a chain starts after an empty line, with its modality; `  symbol = value unit`; `        = formula   [source]`; the verdict, indented by two, ends it.</summary>
    private static List<PrintedChain> Chains(string text) =>
        [.. text.Split("\n\n").Skip(1).Where(block => Modality().IsMatch(block)).Select(block =>
        {
            string[] printed = block.Split('\n', StringSplitOptions.RemoveEmptyEntries);
            var lines = new List<DerivedNumber>();
            var verdict = new List<string>();
            bool inFormula = false;
            foreach (string line in printed.Skip(1))
            {
                if (Head().Match(line) is { Success: true } head)
                {
                    lines.Add(new(head.Groups[1].Value, "", double.Parse(head.Groups[2].Value, NumberStyles.Float, CultureInfo.InvariantCulture), "", "", "", null));
                    inFormula = false;
                }
                else if (Formula().Match(line) is { Success: true } formula)
                {
                    lines[^1] = lines[^1] with { Formula = formula.Groups[1].Value };
                    inFormula = formula.Groups[2].Length == 0;
                }
                else if (inFormula && line.StartsWith("          ", StringComparison.Ordinal))
                {
                    lines[^1] = lines[^1] with { Formula = lines[^1].Formula + " " + line.Trim() };
                }
                else if (!line.StartsWith("        ", StringComparison.Ordinal) && lines.Count > 0)
                {
                    verdict.Add(line.Trim());
                }
                else
                {
                    inFormula = false;
                }
            }

            return new PrintedChain(printed[0], lines, string.Join(" ", verdict));
        })];

    private sealed record PrintedChain(string Heading, IReadOnlyList<DerivedNumber> Lines, string Verdict);

    [GeneratedRegex("^(EEG|MEG)( and MEG together)?: ")]
    private static partial Regex Modality();

    [GeneratedRegex(@"^  (\w+) += (\S+)")]
    private static partial Regex Head();

    [GeneratedRegex(@"^        = (.+?)(   \[.*)?$")]
    private static partial Regex Formula();

    [GeneratedRegex(@": ([\d,]+) trials?\b")]
    private static partial Regex Trials();
}
