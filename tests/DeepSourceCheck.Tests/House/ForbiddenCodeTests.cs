using System.Globalization;
using System.Text.RegularExpressions;

namespace DeepSourceCheck.Tests.House;

/// <summary>Code that breaks a promise of the house: same bytes everywhere, relative comparisons on fields, nothing left undone.</summary>
public class ForbiddenCodeTests
{
    /// <summary>Name, pattern, folder, and the files where the pattern is right, each for the reason beside it.</summary>
    private static readonly (string Why, string Pattern, string Folder, string[] Except)[] Rules =
    [
        ("only the command line writes to the console; the rest hands text back", @"(?<![\w.])(System\.)?Console\.(Write|Out\b|Error\b|In\b|Read|Title|Foreground|SetOut)", "src", ["src/DeepSourceCheck.Cli/"]),

        // ResultFolder: age of folders that killed runs left behind; never reaches a result.
        ("the clock must not reach a result", @"\b(DateTime|DateTimeOffset)\.(Now|UtcNow|Today)\b", "src", ["src/DeepSourceCheck.Report/ResultFolder.cs"]),
        ("random numbers come from stated seeds or fixed lattices", @"\bnew Random\(|\bRandom\.Shared\b|\bGuid\.NewGuid\b|\bRandomNumberGenerator\b|\bnew CryptoRandom", "src", []),
        ("culture must not reach text or numbers", @"\bCultureInfo\.(CurrentCulture|CurrentUICulture|InstalledUICulture)\b|\.To(Lower|Upper)\(\)", "src", []),
        // RegionRun: a pool of workers whose tallies are whole counts and sets of values, the same in any order; chunks have a fixed size and are appended in the dipoles' order.
        ("the order of threads must not reach a result", @"\bConcurrentBag\b|\.AsParallel\(", "src", ["src/DeepSourceCheck.Core/Planning/RegionRun.cs"]),
        ("how much is computed at once must not depend on the machine", @"\bEnvironment\.(ProcessorCount|TickCount)", "src/DeepSourceCheck.Core", ["src/DeepSourceCheck.Core/Planning/RegionRun.cs"]),
        ("string hashes differ from run to run", @"\bHashCode\.Combine\b|""\.GetHashCode\(", "src", []),
        ("work is finished or not begun", @"\bNotImplementedException\b|\b(TODO|FIXME|HACK|XXX)\b", "src", []),
        ("work is finished or not begun", @"\bNotImplementedException\b|//.*\b(TODO|FIXME|HACK)\b", "tests", ["tests/DeepSourceCheck.Tests/House/ForbiddenCodeTests.cs"]),

        // xunit's decimal places take 100 fT for 400 fT.
        ("fields are compared relatively, never by decimal places", @"\bAssert\.(Not)?Equal\([^;]*,\s*(precision:\s*)?\d+\s*\);", "tests", ["tests/DeepSourceCheck.Tests/House/ForbiddenCodeTests.cs"]),
        ("a skipped test states its reason and its issue in the open, not in an attribute", @"\[(Fact|Theory)\(.*Skip\s*=", "tests", ["tests/DeepSourceCheck.Tests/House/ForbiddenCodeTests.cs"]),
    ];

    public static TheoryData<string, string> Provocations => new()
    {
        { "src", "Console.WriteLine(1);" },
        { "src", "var t = DateTime.UtcNow;" },
        { "src", "var r = new Random(3);" },
        { "src", "s.ToLower()" },
        { "src", "var b = new ConcurrentBag<int>();" },
        { "src", "throw new NotImplementedException();" },
        { "tests", "Assert.Equal(1e-13, field, 12);" },
        { "tests", "Assert.Equal(a, b, precision: 6);" },
    };

    [Fact]
    public void Source_HoldsNoForbiddenCode()
    {
        List<string> found = [];
        foreach ((string why, string pattern, string folder, string[] except) in Rules)
        {
            var regex = new Regex(pattern, RegexOptions.CultureInvariant);
            foreach (string file in Repository.Files(folder, "*.cs").Where(f => !except.Any(e => f.StartsWith(e, StringComparison.Ordinal))))
            {
                string[] lines = File.ReadAllLines(Repository.At(file));
                for (int i = 0; i < lines.Length; i++)
                {
                    if (regex.IsMatch(Code(lines[i], pattern)))
                    {
                        found.Add(string.Create(CultureInfo.InvariantCulture, $"{file}:{i + 1}: {why}: {lines[i].Trim()}"));
                    }
                }
            }
        }

        Assert.True(found.Count == 0, string.Join('\n', found));
    }

    [Theory]
    [MemberData(nameof(Provocations))]
    public void Rules_CatchWhatTheyForbid(string folder, string line) =>
        Assert.Contains(Rules, rule => rule.Folder == folder && Regex.IsMatch(Code(line, rule.Pattern), rule.Pattern, RegexOptions.CultureInvariant));

    [Fact]
    public void Culture_CannotBeChangedAtAll()
    {
        // Invariant globalisation: the process knows no other culture, so formatting cannot differ from machine to machine.
        Assert.Equal("", CultureInfo.CurrentCulture.Name);
        Assert.Throws<CultureNotFoundException>(() => new CultureInfo("de-DE"));
    }

    /// <summary>The line without its comment, unless the rule looks for comments.</summary>
    private static string Code(string line, string pattern)
    {
        if (pattern.Contains("TODO", StringComparison.Ordinal))
        {
            return line;
        }

        int comment = line.IndexOf("//", StringComparison.Ordinal);
        return comment >= 0 && (comment == 0 || line[comment - 1] != ':') ? line[..comment] : line;
    }
}
