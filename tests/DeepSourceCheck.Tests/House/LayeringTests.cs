using System.Reflection;
using System.Text.RegularExpressions;

using DeepSourceCheck.Cli;
using DeepSourceCheck.Core.Geometry;

namespace DeepSourceCheck.Tests.House;

/// <summary>Arrows point one way: Cli to Report and Files, both to Core; within Core no folder names a later one.</summary>
public partial class LayeringTests
{
    /// <summary>
    /// The folders of Core in the order in which the data flows: each may name those before it, none after it. Studies (the typed study and its errors) stands as soon as it
    /// can, after the heads that it holds; Results (the result model and the words that name things) as soon as all that it holds is known.
    /// </summary>
    private static readonly string[] Stages =
        ["Units", "Geometry", "Numerics", "Heads", "Studies", "Sensors", "Regions", "Leadfields", "Directions", "Waveforms", "Noise", "Results", "Detection", "Attribution", "Planning"];

    [Theory]
    [InlineData("DeepSourceCheck.Core", new[] { "MathNet.Numerics" })]
    [InlineData("DeepSourceCheck.Files", new[] { "DeepSourceCheck.Core", "YamlDotNet" })]
    [InlineData("DeepSourceCheck.Report", new[] { "DeepSourceCheck.Core", "ScottPlot", "SkiaSharp" })]
    [InlineData("deepsourcecheck", new[] { "DeepSourceCheck.Core", "DeepSourceCheck.Files", "DeepSourceCheck.Report", "System.CommandLine" })]
    public void Assembly_ReferencesOnlyWhatItsLayerMay(string assembly, string[] allowed)
    {
        AssemblyName[] references = Assembly.Load(assembly).GetReferencedAssemblies();
        string[] foreign = [.. references.Select(r => r.Name!).Where(name => !IsFramework(name) && !allowed.Contains(name))];
        Assert.True(foreign.Length == 0, $"{assembly} references {string.Join(", ", foreign)}; its layer may name {string.Join(", ", allowed)}");
    }

    [Fact]
    public void Assemblies_AreTheOnesThatTheTestsRun()
    {
        // The theory above loads by name: these are the very assemblies that the other tests exercise.
        Assert.Equal("DeepSourceCheck.Core", typeof(Vec3).Assembly.GetName().Name);
        Assert.Equal("deepsourcecheck", typeof(ExitStatus).Assembly.GetName().Name);
    }

    [Fact]
    public void CoreFolders_AreTheStages()
    {
        string[] folders = [.. Directory.GetDirectories(Repository.At("src", "DeepSourceCheck.Core")).Select(f => Path.GetFileName(f)).Where(f => f is not ("obj" or "bin"))];
        Assert.Equal(Stages.Order(StringComparer.Ordinal), folders.Order(StringComparer.Ordinal));
    }

    [Fact]
    public void DevelopersGuide_ListsTheStagesInTheirOrder()
    {
        string guide = File.ReadAllText(Repository.At("DEVELOPERS.md"));
        string[] listed = [.. TableRow().Matches(guide).Select(m => m.Groups[1].Value).Where(Stages.Contains)];
        Assert.Equal(Stages, listed);
    }

    [Fact]
    public void CoreStage_NeverNamesALaterOne()
    {
        List<string> violations = [];
        int looked = 0;
        foreach (string file in Repository.Files("src/DeepSourceCheck.Core", "*.cs"))
        {
            string stage = file.Split('/')[2];
            foreach (string named in NamedStages(File.ReadAllText(Repository.At(file))).Where(n => n != stage))
            {
                looked++;
                if (Array.IndexOf(Stages, named) > Array.IndexOf(Stages, stage))
                {
                    violations.Add($"{file} names {named}");
                }
            }
        }

        Assert.True(looked > 10, $"only {looked} references between stages were found: the search itself is broken");
        Assert.True(violations.Count == 0, string.Join('\n', violations));
    }

    [Theory]
    [InlineData("using DeepSourceCheck.Core.Planning;", "Planning")]
    [InlineData("    Noise.BandCovariance.Of(x);\n using DeepSourceCheck.Core.Noise;", "Noise")]
    [InlineData("var x = DeepSourceCheck.Core.Heads.IHead;", "Heads")]
    public void NamedStages_FindsEachWayOfNaming(string source, string stage) => Assert.Contains(stage, NamedStages(source));

    private static IEnumerable<string> NamedStages(string source) => CoreName().Matches(source).Select(m => m.Groups[1].Value).Distinct();

    private static bool IsFramework(string name) =>
        name is "netstandard" or "mscorlib" || (name.StartsWith("System.", StringComparison.Ordinal) && name != "System.CommandLine") || name is "Microsoft.Win32.Primitives";

    [GeneratedRegex(@"^\| `(\w+)` \|", RegexOptions.Multiline)]
    private static partial Regex TableRow();

    [GeneratedRegex(@"\bDeepSourceCheck\.Core\.([A-Z]\w*)(?!\w*\.csproj)")]
    private static partial Regex CoreName();
}
