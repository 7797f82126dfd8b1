using DeepSourceCheck.Tests.House;

namespace DeepSourceCheck.Tests.Cli;

/// <summary>Texts that were read by a person and recorded. Re-recorded only on purpose: set DEEPSOURCECHECK_RERECORD=1, run, read the difference, commit it with the reason.</summary>
internal static class GoldenText
{
    private const string Switch = "DEEPSOURCECHECK_RERECORD";

    /// <summary>Fails where the text differs from the recorded one; with the switch set, records it and fails all the same, so that no run is green by recording.</summary>
    /// <param name="name">File below tests/DeepSourceCheck.Tests/Golden.</param>
    /// <param name="actual">The text, lines ended by line feeds.</param>
    public static void Matches(string name, string actual)
    {
        string file = Repository.At("tests", "DeepSourceCheck.Tests", "Golden", name);
        if (Environment.GetEnvironmentVariable(Switch) == "1")
        {
            Directory.CreateDirectory(Path.GetDirectoryName(file)!);
            File.WriteAllText(file, actual);
            Assert.Fail($"{name} was recorded anew; read the difference and run again without {Switch}");
        }

        Assert.True(File.Exists(file), $"{file} was never recorded: set {Switch}=1 once");
        Assert.Equal(File.ReadAllText(file), actual);
    }
}
