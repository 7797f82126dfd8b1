using System.Text.Json;

using DeepSourceCheck.Cli;

namespace DeepSourceCheck.Examples;

/// <summary>A study run through the command line, read back through its assessment.json alone, as a script would.</summary>
internal sealed class AssessedStudy
{
    private readonly JsonElement _root;

    private AssessedStudy(JsonElement root) => _root = root;

    /// <summary>Runs a study that must succeed.</summary>
    /// <param name="study">File, or null for the embedded default study.</param>
    public static AssessedStudy Run(string? study) => Run(study, []);

    /// <summary>Runs a study that must succeed.</summary>
    /// <param name="study">File, or null for the embedded default study.</param>
    /// <param name="more">Further arguments.</param>
    public static AssessedStudy Run(string? study, params string[] more)
    {
        string folder = Directory.CreateTempSubdirectory("dsc-example-").FullName;
        try
        {
            string result = Path.Combine(folder, "out");
            string[] arguments = ["assess", .. study is null ? Array.Empty<string>() : [study], "--out", result, "--without", "dipoles,figures,report", .. more];
            (int status, _, string error) = Execute(arguments);
            Assert.True(status == ExitStatus.Done, $"status {status}: {error}");
            using JsonDocument document = JsonDocument.Parse(File.ReadAllText(Path.Combine(result, "assessment.json")));
            return new(document.RootElement.Clone());
        }
        finally
        {
            Directory.Delete(folder, recursive: true);
        }
    }

    /// <summary>Runs a study with its text changed; files beside it are copied along.</summary>
    public static AssessedStudy RunChanged(string study, params (string From, string To)[] changes) => Changed(study, changes, Run);

    /// <summary>Runs a study beside a file that it names and that the test writes.</summary>
    public static AssessedStudy RunBeside(string study, string name, byte[] bytes) => Changed(study, [], file =>
    {
        File.WriteAllBytes(Path.Combine(Path.GetDirectoryName(file)!, name), bytes);
        return Run(file);
    });

    /// <summary>What the program says of a changed study that it must refuse.</summary>
    public static string Refusal(string study, params (string From, string To)[] changes) => Changed(study, changes, file =>
    {
        (int status, string standardOutput, string error) = Execute(["check", file!]);
        Assert.True(status == ExitStatus.InputWrong, $"status {status}: {standardOutput}{error}");
        return error;
    });

    /// <summary>The whole file.</summary>
    public JsonElement Root => _root;

    /// <summary>One of its variants.</summary>
    public AssessedStudy Variant(string name) => new(_root.GetProperty("variants").EnumerateArray().Single(v => v.GetProperty("name").GetString() == name));

    /// <summary>A region under a response.</summary>
    public JsonElement Region(string response, string region) => _root.GetProperty("responses").EnumerateArray().Single(r => r.GetProperty("name").GetString() == response)
        .GetProperty("regions").EnumerateArray().Single(r => r.GetProperty("region").GetString() == region);

    /// <summary>The figures of a modality, direction and measure.</summary>
    public JsonElement Result(string response, string region, string modality, string direction, string measure) =>
        Rows(response, region).Single(r => Is(r, "modality", modality) && Is(r, "direction", direction) && Is(r, "measure", measure));

    /// <summary>All rows of a region.</summary>
    public IEnumerable<JsonElement> Rows(string response, string region) => Region(response, region).GetProperty("results").EnumerateArray();

    /// <summary>Median count of a row under a rule.</summary>
    public static long Trials(JsonElement row, string rule = "amplitude_ratio") => Target(row, rule).GetProperty("trials").GetProperty("p50").GetInt64();

    /// <summary>A row's entry for a rule.</summary>
    public static JsonElement Target(JsonElement row, string rule) => row.GetProperty("targets").EnumerateArray().Single(t => Is(t, "rule", rule));

    /// <summary>Peak amplitude of a row, in its unit.</summary>
    public static double Peak(JsonElement row, string unit)
    {
        JsonElement peak = row.GetProperty("peak_amplitude");
        Assert.Equal(unit, peak.GetProperty("unit").GetString());
        return peak.GetProperty("value").GetDouble();
    }

    /// <summary>Median SNR of a row [dB].</summary>
    public static double SnrDb(JsonElement row) => row.GetProperty("snr_db").GetProperty("p50").GetDouble();

    private static T Changed<T>(string study, (string From, string To)[] changes, Func<string?, T> use)
    {
        string folder = Directory.CreateTempSubdirectory("dsc-changed-").FullName;
        try
        {
            foreach (string file in Directory.EnumerateFiles(Path.GetDirectoryName(study)!))
            {
                File.Copy(file, Path.Combine(folder, Path.GetFileName(file)));
            }

            string copy = Path.Combine(folder, Path.GetFileName(study));
            string text = File.ReadAllText(copy);
            foreach ((string from, string to) in changes)
            {
                Assert.Contains(from, text, StringComparison.Ordinal);
                text = text.Replace(from, to, StringComparison.Ordinal);
            }

            File.WriteAllText(copy, text);
            return use(copy);
        }
        finally
        {
            Directory.Delete(folder, recursive: true);
        }
    }

    private static (int Status, string Out, string Error) Execute(string[] arguments)
    {
        using var standardOutput = new StringWriter { NewLine = "\n" };
        using var standardError = new StringWriter { NewLine = "\n" };
        int status = CommandLine.Run(arguments, new Surroundings { Out = standardOutput, Error = standardError });
        return (status, standardOutput.ToString(), standardError.ToString());
    }

    private static bool Is(JsonElement row, string key, string value) => row.GetProperty(key).GetString() == value;
}
