using DeepSourceCheck.Cli;
using DeepSourceCheck.Cli.Output;
using DeepSourceCheck.Tests.Support;

namespace DeepSourceCheck.Tests.Cli;

public class NewFilesTests
{
    [Fact]
    public void WriterThatFails_LeavesNothing()
    {
        using ScratchFolder scratch = new();
        using var interruption = new Interruption();
        Assert.Throws<IOException>(() => NewFiles.Write(scratch.At("mine"), ["a", "b"], folder =>
        {
            File.WriteAllText(Path.Combine(folder, "a"), "half");
            throw new IOException("full");
        }, interruption));
        Assert.Empty(Directory.EnumerateFileSystemEntries(scratch.Path));
    }

    [Fact]
    public void FileThatAppearsMeanwhile_IsLeftAlone_AndTheOthersAreTakenBack()
    {
        using ScratchFolder scratch = new();
        using var interruption = new Interruption();
        Assert.Throws<IOException>(() => NewFiles.Write(scratch.Path, ["a", "b"], folder =>
        {
            File.WriteAllText(Path.Combine(folder, "a"), "ours");
            File.WriteAllText(Path.Combine(folder, "b"), "ours");
            File.WriteAllText(scratch.At("b"), "the user's");
        }, interruption));
        Assert.Equal(scratch.At("b"), Assert.Single(Directory.EnumerateFileSystemEntries(scratch.Path)));
        Assert.Equal("the user's", File.ReadAllText(scratch.At("b")));
    }
}
