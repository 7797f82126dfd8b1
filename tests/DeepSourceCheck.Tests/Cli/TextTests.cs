using DeepSourceCheck.Cli;

namespace DeepSourceCheck.Tests.Cli;

/// <summary>Sizes, times and the progress line.</summary>
public class TextTests
{
    [Theory]
    [InlineData("4GB", 4_000_000_000)]
    [InlineData("800MB", 800_000_000)]
    [InlineData("2GiB", 2L << 30)]
    [InlineData("1.5 gb", 1_500_000_000)]
    [InlineData("512 KiB", 512L << 10)]
    [InlineData("1B", 1)]
    public void MemorySize_ReadsWhatPeopleWrite(string text, long bytes)
    {
        Assert.True(MemorySize.TryParse(text, out long read));
        Assert.Equal(bytes, read);
    }

    [Theory]
    [InlineData("")]
    [InlineData("4")]
    [InlineData("GB")]
    [InlineData("-4GB")]
    [InlineData("0GB")]
    [InlineData("1,5GB")]
    [InlineData("1e3GB")]
    [InlineData("4GBs")]
    [InlineData("99999999999TB")]
    [InlineData("0.1B")]
    [InlineData("٤GB")]
    public void MemorySize_RefusesTheRest(string text) => Assert.False(MemorySize.TryParse(text, out _));

    [Theory]
    [InlineData(0, "0.1 s")]
    [InlineData(3.21, "3.2 s")]
    [InlineData(59.6, "60 s")]
    [InlineData(600, "10 min")]
    [InlineData(9000, "2.5 h")]
    public void Duration_IsAsRoughAsItIsKnown(double seconds, string text) => Assert.Equal(text, Durations.Rough(seconds));

    [Theory]
    [InlineData(0.25, 1.0, "dipoles: 25 %")]
    [InlineData(0.25, 10.0, "dipoles: 25 %, about 30 s left")]
    [InlineData(0.01, 10.0, "dipoles: 1 %")]
    [InlineData(1.0, 10.0, "dipoles: 100 %")]
    public void ProgressText_ShowsTheTimeLeftOnlyOnceThePaceIsKnown(double fraction, double elapsed, string text) =>
        Assert.Equal(text, ProgressLine.Text("dipoles", fraction, TimeSpan.FromSeconds(elapsed)));

    [Fact]
    public void ProgressLine_RewritesOneLineAndErasesIt()
    {
        using var error = new StringWriter();
        double now = 0;
        using (var line = new ProgressLine(error, 40, () => TimeSpan.FromSeconds(now)))
        {
            line.Report("reading", 0);
            line.Report("reading", 0.5);
            now = 1;
            line.Report("reading", 0.9);
            line.Report("reading", 0.2);
            now = 2;
            line.Report("a stage whose name is far too long for the terminal", double.NaN);
        }

        string[] drawn = error.ToString().Split('\r', StringSplitOptions.RemoveEmptyEntries);
        Assert.Equal(["reading: 0 %", "reading: 90 %"], drawn[..2]);
        Assert.Equal(39, drawn[2].Length);
        Assert.Equal(new string(' ', 39), drawn[3]);
        Assert.Equal(4, drawn.Length);
        Assert.DoesNotContain('\n', error.ToString());
    }
}
