using DeepSourceCheck.Cli;
using DeepSourceCheck.Core.Studies;

namespace DeepSourceCheck.Tests.Cli;

/// <summary>Whatever a step throws becomes the contract's exit status and plain lines.</summary>
public class FailureTests
{
    // errno ENOSPC on Linux; System.IO puts it into the HResult's low bits.
    private const int DiskFull = 28;

    [Fact]
    public void WrongInput_PrintsEachProblemOnALineAndEndsWith2()
    {
        Outcome outcome = Throwing(new InputException(
        [
            new("study.yaml", 3, 5, "head.spheres", "found 'x';\nallowed: a preset"),
            new("coils.tsv", 7, 0, "axis_x", "not a number: 'abc'"),
        ]));
        Assert.Equal(ExitStatus.InputWrong, outcome.Status);
        Assert.Equal(["error: study.yaml:3:5: head.spheres: found 'x'; allowed: a preset", "error: coils.tsv:7: axis_x: not a number: 'abc'"], outcome.ErrorLines);
        Assert.Empty(outcome.Out);
    }

    [Fact]
    public void OutOfMemoryInAWorker_EndsWith3AndSaysWhatHelps()
    {
        Outcome outcome = Throwing(new AggregateException(new OperationCanceledException(), new AggregateException(new InsufficientMemoryException("x"))));
        Assert.Equal(ExitStatus.Failed, outcome.Status);
        Assert.Contains("spacing_mm", Assert.Single(outcome.ErrorLines), StringComparison.Ordinal);
    }

    [Fact]
    public void FullDisk_EndsWith3AndSaysSo()
    {
        Outcome outcome = Throwing(new IOException("No space left on device : '/x'", DiskFull));
        Assert.Equal(ExitStatus.Failed, outcome.Status);
        Assert.Contains("the disk is full", Assert.Single(outcome.ErrorLines), StringComparison.Ordinal);
    }

    public static TheoryData<Exception> InputExceptions =>
        [new UnauthorizedAccessException("Access to the path '/x' is denied."), new FileNotFoundException("Could not find file '/x'."), new DirectoryNotFoundException("Could not find a part of '/x'.")];

    [Theory]
    [MemberData(nameof(InputExceptions))]
    public void FileThatCannotBeRead_EndsWith2(Exception exception)
    {
        Outcome outcome = Throwing(exception);
        Assert.Equal(ExitStatus.InputWrong, outcome.Status);
        Assert.Contains("/x", Assert.Single(outcome.ErrorLines), StringComparison.Ordinal);
    }

    [Fact]
    public void FailedComputation_EndsWith3OnOneLineWithoutATrace()
    {
        Outcome outcome = Throwing(new InvalidOperationException("the series did not converge:\r\n  degree 5000\u2028left"));
        Assert.Equal(ExitStatus.Failed, outcome.Status);
        string line = Assert.Single(outcome.ErrorLines);
        Assert.StartsWith("error: the computation failed: the series did not converge:    degree 5000 left", line, StringComparison.Ordinal);
        Assert.DoesNotContain("Exception", outcome.Error, StringComparison.Ordinal);
        Assert.DoesNotContain("   at ", outcome.Error, StringComparison.Ordinal);
    }

    [Fact]
    public void FailedComputation_ShowsWhereWhenAskedTo()
    {
        Outcome outcome = InProcess.Run(s => s with { Trace = true, Steps = Throws(new InvalidOperationException("x")) }, "check");
        Assert.Equal(ExitStatus.Failed, outcome.Status);
        Assert.Contains("   at ", outcome.Error, StringComparison.Ordinal);
    }

    public static TheoryData<Exception> AfterInterruption => [new OperationCanceledException(), new IOException("pipe"), new AggregateException(new TaskCanceledException()), new ArgumentException("x")];

    [Theory]
    [MemberData(nameof(AfterInterruption))]
    public void WhateverFollowsAnInterruption_EndsWith130(Exception exception)
    {
        using var interruption = new Interruption();
        interruption.Request();
        Outcome outcome = InProcess.Run(s => s with { Interruption = interruption, Steps = Throws(exception) }, "check");
        Assert.Equal(ExitStatus.Interrupted, outcome.Status);
        Assert.Equal("interrupted: nothing was written", Assert.Single(outcome.ErrorLines));
        Assert.Empty(outcome.Out);
    }

    [Fact]
    public void StandardOutputThatFails_EndsWith3()
    {
        using var error = new StringWriter();
        using var full = new StreamWriter(new FullDevice());
        int status = CommandLine.Run(["--help"], new Surroundings { Out = full, Error = error });
        Assert.Equal(ExitStatus.Failed, status);
        Assert.Contains("the disk is full", error.ToString(), StringComparison.Ordinal);
    }

    [Fact]
    public void Settings_ReachTheStepsAsTyped()
    {
        DeepSourceCheck.Cli.Pipeline.RunSettings? seen = null;
        Outcome outcome = InProcess.Run(s => s with
        {
            Steps = s.Steps with
            {
                Prepare = (study, _, settings) =>
                {
                    Assert.Null(study);
                    seen = settings;
                    throw new InputException(null, null, "stop here");
                },
            },
        }, "why", "--memory", "2GiB");
        Assert.Equal(ExitStatus.InputWrong, outcome.Status);
        Assert.Equal(2L << 30, seen!.MemoryBudget);
        Assert.Null(seen.Progress);
    }

    private static Outcome Throwing(Exception exception) => InProcess.Run(s => s with { Steps = Throws(exception) }, "check");

    private static PipelineSteps Throws(Exception exception) => new((_, _, _) => throw exception, (_, _, _) => throw exception, (_, _, _) => throw exception);

    /// <summary>A device without room, as /dev/full.</summary>
    private sealed class FullDevice : MemoryStream
    {
        public override void Write(byte[] buffer, int offset, int count) => throw new IOException("No space left on device", DiskFull);

        public override void Write(ReadOnlySpan<byte> buffer) => throw new IOException("No space left on device", DiskFull);
    }
}
