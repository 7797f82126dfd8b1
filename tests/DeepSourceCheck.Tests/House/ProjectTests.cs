using System.Text.RegularExpressions;
using System.Xml.Linq;

namespace DeepSourceCheck.Tests.House;

/// <summary>Projects: central pinned versions, lock files, one list.</summary>
public class ProjectTests
{
    private static IEnumerable<string> Projects => Repository.Files("src", "*.csproj").Concat(Repository.Files("tests", "*.csproj"));

    [Fact]
    public void Versions_AreCentralAndPinned()
    {
        XDocument central = XDocument.Load(Repository.At("src", "Directory.Packages.props"));
        Assert.Equal("true", central.Descendants("ManagePackageVersionsCentrally").Single().Value);
        XElement[] versions = [.. central.Descendants("PackageVersion")];
        Assert.NotEmpty(versions);
        foreach (XElement version in versions)
        {
            Assert.Matches(@"^\d+(\.\d+)+(-[0-9A-Za-z.-]+)?$", version.Attribute("Version")!.Value);
        }

        foreach (string project in Projects)
        {
            XElement[] stated = [.. XDocument.Load(Repository.At(project)).Descendants("PackageReference").Where(p => (p.Attribute("Version") ?? p.Attribute("VersionOverride")) is not null)];
            Assert.True(stated.Length == 0, $"{project} states a version of its own: {string.Join(", ", stated.Select(s => s.Attribute("Include")?.Value))}");
        }
    }

    [Fact]
    public void LockFiles_StandBesideEveryProject()
    {
        string[] tracked = [.. Repository.Tracked()];
        string[] missing = [.. Projects.Select(p => p[..(p.LastIndexOf('/') + 1)] + "packages.lock.json").Where(l => !tracked.Contains(l))];
        Assert.True(missing.Length == 0, "no lock file: " + string.Join(", ", missing));
    }

    [Fact]
    public void Solution_ListsEveryProject()
    {
        string solution = File.ReadAllText(Repository.At("DeepSourceCheck.sln")).Replace('\\', '/');
        string[] missing = [.. Projects.Where(p => !solution.Contains(p, StringComparison.Ordinal))];
        Assert.True(missing.Length == 0, "not in the solution: " + string.Join(", ", missing));
    }

    [Fact]
    public void Build_TreatsWarningsAsErrorsEverywhere()
    {
        string shared = File.ReadAllText(Repository.At("src", "Directory.Build.props"));
        Assert.Contains("<TreatWarningsAsErrors>true</TreatWarningsAsErrors>", shared, StringComparison.Ordinal);
        Assert.Contains("<Nullable>enable</Nullable>", shared, StringComparison.Ordinal);
        Assert.Contains("../src/Directory.Build.props", File.ReadAllText(Repository.At("tests", "Directory.Build.props")), StringComparison.Ordinal);
        string[] loosened = [.. Projects.Where(p => Regex.IsMatch(File.ReadAllText(Repository.At(p)), "<(TreatWarningsAsErrors|Nullable|NoWarn|WarningLevel)>"))];
        Assert.True(loosened.Length == 0, "a project has rules of its own: " + string.Join(", ", loosened));
    }
}
